package main

import "runtime/debug"

// programVersion names the program and the build it came from. It goes into
// every recording, so that a figure can be traced to the code that made it.
func programVersion() string {
	version := "unreleased"
	if info, ok := debug.ReadBuildInfo(); ok {
		if v := info.Main.Version; v != "" && v != "(devel)" {
			version = v
		}
	}
	return "tautramp " + version
}
