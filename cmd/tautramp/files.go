package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
)

// writeAside writes a result beside its place and renames it there once it is
// whole, so that a failed command leaves nothing behind. "-" is stdout.
func writeAside(path string, e env, write func(io.Writer) error) error {
	if path == "-" {
		return write(e.stdout)
	}
	f, err := os.CreateTemp(filepath.Dir(path), ".tautramp-*")
	if err != nil {
		return &fileError{fmt.Errorf("cannot write %s: %w", path, err)}
	}
	err = write(f)
	if err == nil {
		err = f.Chmod(0o644)
	}
	if closeErr := f.Close(); err == nil {
		err = closeErr
	}
	if err == nil {
		err = os.Rename(f.Name(), path)
	}
	if err != nil {
		return &fileError{errors.Join(fmt.Errorf("cannot write %s: %w", path, err), os.Remove(f.Name()))}
	}
	return nil
}

// refuseSame stops an output from replacing the input it is made from.
func refuseSame(input string, outputs ...string) error {
	in, err := os.Stat(input)
	if err != nil {
		return err
	}
	for _, path := range outputs {
		out, err := os.Stat(path)
		if err == nil && os.SameFile(in, out) {
			return &usageError{fmt.Sprintf("%s is the input; give the output another name", path)}
		}
	}
	return nil
}

// refuseExisting stops a command from replacing a file that was there.
func refuseExisting(path string) error {
	_, err := os.Lstat(path)
	switch {
	case err == nil:
		return &usageError{fmt.Sprintf("%s is already there; it is not overwritten, give another name", path)}
	case errors.Is(err, fs.ErrNotExist):
		return nil
	}
	return err
}
