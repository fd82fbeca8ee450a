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
		return &fileError{fmt.Errorf("cannot write %s: %w", path, bare(err))}
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
		return &fileError{errors.Join(fmt.Errorf("cannot write %s: %w", path, bare(err)), os.Remove(f.Name()))}
	}
	return nil
}

// bare takes the name of a file that the user never gave out of an error.
func bare(err error) error {
	if pathErr, ok := errors.AsType[*fs.PathError](err); ok {
		return pathErr.Err
	}
	return err
}

// checkOutputs refuses results that would end in one file, replace what is no
// result, or have no folder, before any work is done for them.
func checkOutputs(paths []string) error {
	seen := map[string]bool{}
	for _, path := range paths {
		if path == "" {
			continue
		}
		clean := filepath.Clean(path)
		if seen[clean] {
			return &usageError{fmt.Sprintf("two results cannot both go to %s", path)}
		}
		seen[clean] = true
		if path == "-" {
			continue
		}
		if ext := filepath.Ext(path); ext == ".ramp" || ext == ".toml" || ext == ".txt" {
			return &usageError{fmt.Sprintf("%s: a result does not go to a %s file, which may hold what cannot be made again", path, ext)}
		}
		if info, err := os.Stat(filepath.Dir(path)); err != nil || !info.IsDir() {
			return &fileError{fmt.Errorf("%s: there is no folder %s", path, filepath.Dir(path))}
		}
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
