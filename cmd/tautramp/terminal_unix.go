//go:build unix

package main

import (
	"os"

	"golang.org/x/sys/unix"
)

// terminalWidth is the number of columns of a terminal, and 0 for a file that
// is none. A terminal that does not tell its size counts as 80 wide.
func terminalWidth(f *os.File) int {
	size, err := unix.IoctlGetWinsize(int(f.Fd()), unix.TIOCGWINSZ)
	switch {
	case err != nil || os.Getenv("TERM") == "dumb":
		return 0
	case size.Col == 0:
		return 80
	}
	return int(size.Col)
}
