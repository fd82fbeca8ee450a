package main

import (
	"errors"
	"net"
	"os"
	"os/exec"
	"regexp"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"tautramp": main})
}

// TestScripts runs the program as a user does, one script a topic. "exits N"
// runs a command and wants exit code N; "await FILE" waits for a file.
func TestScripts(t *testing.T) {
	needTerminals(t)
	testscript.Run(t, testscript.Params{
		Dir:                 "testdata/script",
		RequireExplicitExec: true,
		RequireUniqueNames:  true,
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"exits":    wantExit,
			"await":    awaitFile,
			"alter":    alterByte,
			"agrees":   agrees,
			"awaittcp": awaitTCP,
			"shopmill": writeShopMill, "awaitpoints": awaitPoints,
		},
		Setup: func(e *testscript.Env) error {
			free, err := net.Listen("tcp", "127.0.0.1:0")
			if err != nil {
				return err
			}
			e.Setenv("ADDRESS", free.Addr().String())
			return free.Close()
		},
		Condition: func(cond string) (bool, error) {
			return cond == "long" && !testing.Short(), nil
		},
	})
}

func needTerminals(t *testing.T) {
	t.Helper()
	if runtime.GOOS == "windows" {
		t.Skip("no pseudo-terminals on Windows; the packages below are tested there")
	}
}

func wantExit(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits N command...")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	if err := ts.Exec(args[1], args[2:]...); err != nil {
		exit, ok := errors.AsType[*exec.ExitError](err)
		if !ok {
			ts.Fatalf("%v", err)
		}
		got = exit.ExitCode()
	}
	if got != want {
		ts.Fatalf("exit code %d, want %d", got, want)
	}
}

func awaitFile(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: await FILE")
	}
	for end := time.Now().Add(20 * time.Second); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
		if _, err := os.Stat(ts.MkAbs(args[0])); err == nil {
			return
		}
	}
	ts.Fatalf("%s did not come", args[0])
}

// awaitTCP waits until somebody listens at an address.
func awaitTCP(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: awaittcp ADDRESS")
	}
	for end := time.Now().Add(20 * time.Second); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
		if conn, err := net.Dial("tcp", args[0]); err == nil {
			ts.Check(conn.Close())
			return
		}
	}
	ts.Fatalf("nobody listens at %s", args[0])
}

// alterByte changes one byte in the middle of a file: alter FROM TO.
func alterByte(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 2 {
		ts.Fatalf("usage: alter FROM TO")
	}
	data, err := os.ReadFile(ts.MkAbs(args[0]))
	ts.Check(err)
	data[len(data)/2] ^= 1
	ts.Check(os.WriteFile(ts.MkAbs(args[1]), data, 0o644))
}

// TestReadmeCommandsWorkAsPrinted runs every command line of README.md in one
// folder, in order, as a new user would. The two that need the source tree
// run there.
func TestReadmeCommandsWorkAsPrinted(t *testing.T) {
	needTerminals(t)
	if testing.Short() {
		t.Skip("takes a demo and a rehearsal; the full run has it")
	}
	lines := readmeCommands(t)
	if !slices.Contains(lines, "go run ./cmd/tautramp demo") || !slices.Contains(lines, "go test ./...") {
		t.Fatal("README.md lacks the two set-up commands")
	}
	dir := t.TempDir()
	for _, line := range lines {
		if line == "go test ./..." { // this very run
			continue
		}
		runReadmeLine(t, dir, line)
	}
}

func readmeCommands(t *testing.T) []string {
	t.Helper()
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	var lines []string
	for _, m := range regexp.MustCompile(`(?m)^\$ (.+)$`).FindAllStringSubmatch(string(text), -1) {
		lines = append(lines, m[1])
	}
	return lines
}

func runReadmeLine(t *testing.T, dir, line string) {
	t.Helper()
	words := splitWords(strings.TrimSuffix(line, " &"))
	if words[0] == "go" { // go run ./cmd/tautramp ARGS: the program under test is the same
		words = append([]string{"tautramp"}, words[3:]...)
	}
	if words[0] != "tautramp" {
		t.Fatalf("README.md runs %q", line)
	}
	cmd := exec.Command(words[0], words[1:]...)
	cmd.Dir = dir
	if strings.HasSuffix(line, " &") {
		startInBackground(t, cmd, dir)
		return
	}
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("$ %s\n%s\n%v", line, out, err)
	}
	t.Logf("$ %s\n%s", line, out)
}

// startInBackground starts a command that ends with &, and waits for the port
// that its --link names.
func startInBackground(t *testing.T, cmd *exec.Cmd, dir string) {
	t.Helper()
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := cmd.Process.Kill(); err != nil {
			t.Log(err)
		}
		cmd.Wait() // it was killed: its error says only that
	})
	link := cmd.Args[slices.Index(cmd.Args, "--link")+1]
	for end := time.Now().Add(20 * time.Second); ; time.Sleep(10 * time.Millisecond) {
		if _, err := os.Stat(dir + "/" + link); err == nil {
			return
		}
		if time.Now().After(end) {
			t.Fatal("the rig opened no port")
		}
	}
}

// splitWords cuts a command line at spaces, keeping what stands in quotes.
func splitWords(line string) []string {
	var words []string
	for _, m := range regexp.MustCompile(`"([^"]*)"|(\S+)`).FindAllStringSubmatch(line, -1) {
		words = append(words, m[1]+m[2])
	}
	return words
}
