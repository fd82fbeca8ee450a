package main

import (
	"os"

	"golang.org/x/sys/windows"
)

// terminalWidth is the number of columns of a console, and 0 for a file that
// is none, or for a console too old to redraw a line by sequences.
func terminalWidth(f *os.File) int {
	console := windows.Handle(f.Fd())
	var mode uint32
	if err := windows.GetConsoleMode(console, &mode); err != nil {
		return 0
	}
	if err := windows.SetConsoleMode(console, mode|windows.ENABLE_VIRTUAL_TERMINAL_PROCESSING); err != nil {
		return 0
	}
	var info windows.ConsoleScreenBufferInfo
	if err := windows.GetConsoleScreenBufferInfo(console, &info); err != nil {
		return 80
	}
	return int(info.Window.Right-info.Window.Left) + 1
}
