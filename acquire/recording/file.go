package recording

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"syscall"
	"time"
)

// Create starts a new file at path. An existing file is never touched: the
// error is then fs.ErrExist. A failure leaves nothing behind.
func Create(path string, h Header, every time.Duration) (*Writer, error) {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return nil, fmt.Errorf("create the recording %s: %w; recordings are never overwritten, give another name", path, fs.ErrExist)
	}
	if err != nil {
		return nil, fmt.Errorf("create the recording: %w", err)
	}
	w, err := NewWriter(f, h, every)
	if err == nil {
		err = syncDir(filepath.Dir(path))
		if err == nil {
			return w, nil
		}
		err = errors.Join(err, f.Close())
	}
	return nil, errors.Join(err, os.Remove(path))
}

// syncDir makes the new name itself survive a power cut. Windows has no such
// call, and some file systems refuse it.
func syncDir(dir string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	d, err := os.Open(dir)
	if err != nil {
		return fmt.Errorf("sync the recording's folder: %w", err)
	}
	err = d.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		err = nil
	}
	if err := errors.Join(err, d.Close()); err != nil {
		return fmt.Errorf("sync the recording's folder: %w", err)
	}
	return nil
}

// ReadFile reads the recording at path as Read does.
func ReadFile(path string) (*Recording, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("read a recording: %w", err)
	}
	rec, err := readAll(data)
	if err != nil {
		return rec, fmt.Errorf("%s: %w", path, err)
	}
	return rec, nil
}
