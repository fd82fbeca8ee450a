// Package sim runs the boards of firmware-notes in processor simulators, for
// tests: it builds an image, starts a simulator on it, feeds its sensors from
// the rehearsal rig's physics, and carries its serial line to a host's end of
// the caller's, spoiling bytes on the way when told to. Start with StartAVR or
// StartCortexM; a Cable joins the board's Line to a port.
//
// Deliberately absent: ports, captures, what a line means.
package sim

import (
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
)

// ErrMissing is a tool that this machine has not.
var ErrMissing = errors.New("not installed")

// Notes is the folder firmware-notes, and a folder to build in.
type Notes struct{ Dir, Out string }

// Harness builds the simulator of the AVR and returns its path.
func (n Notes) Harness() (string, error) {
	const header = "/usr/include/simavr/sim_avr.h"
	if _, err := os.Stat(header); err != nil {
		return "", fmt.Errorf("%s is %w: apt-get install libsimavr-dev libelf-dev pkg-config", header, ErrMissing)
	}
	return n.build("sim/harness", "avr-harness", "gcc", "gcc")
}

// AVR builds an image of boards/avr328, such as "clocked-115200.elf". Options
// are the compiler's, such as "-DRUNNING=1".
func (n Notes) AVR(image string, options ...string) (string, error) {
	return n.build("boards/avr328", image, "avr-gcc", "gcc-avr avr-libc", options...)
}

// CortexM builds an image of boards/cortexm3.
func (n Notes) CortexM(image string, options ...string) (string, error) {
	return n.build("boards/cortexm3", image, "arm-none-eabi-gcc", "gcc-arm-none-eabi", options...)
}

// Desk builds the core for this machine, under ASan and UBSan; see
// core/test/desk.c for how to drive it.
func (n Notes) Desk() (string, error) {
	return n.build("core", "desk", "gcc", "gcc libc6-dev")
}

// build makes one file with the folder's own Makefile, outside of the tree.
func (n Notes) build(folder, file, tool, packages string, options ...string) (string, error) {
	for _, t := range [][2]string{{tool, packages}, {"make", "make"}} {
		if err := need(t[0], t[1]); err != nil {
			return "", err
		}
	}
	out, err := filepath.Abs(filepath.Join(n.Out, filepath.Base(folder)+suffix(options)))
	if err != nil {
		return "", err
	}
	path := filepath.Join(out, file)
	args := []string{"-s", "-C", filepath.Join(n.Dir, folder), "BUILD=" + out}
	if len(options) > 0 {
		args = append(args, "OPTIONS="+strings.Join(options, " "))
	}
	if text, err := exec.Command("make", append(args, path)...).CombinedOutput(); err != nil {
		return "", fmt.Errorf("building %s: %w\n%s", path, err, text)
	}
	return path, nil
}

// suffix keeps builds with other options apart.
func suffix(options []string) string {
	return strings.Map(func(r rune) rune {
		if r == '-' || r == '=' || r == ' ' || r == '"' || r == '\\' {
			return '-'
		}
		return r
	}, strings.Join(options, ""))
}

func need(tool, packages string) error {
	if _, err := exec.LookPath(tool); err != nil {
		return fmt.Errorf("%s is %w: apt-get install %s", tool, ErrMissing, packages)
	}
	return nil
}
