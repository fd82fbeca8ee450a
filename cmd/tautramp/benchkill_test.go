package main

import (
	"context"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze/gauge"
)

// killSpeed is how many times faster than life the killed tests run.
const killSpeed = "30"

// quickPlan is a dial test of ten marks, up and down, without long waits.
const quickPlan = `name = "ten marks, quick"
kind = "dial"
range_high = "1000 psi"
steps = 10
first_point = "first step"
directions = "up and down"
settle_seconds = 4
window_seconds = 1
`

// benchOnTCP serves a bench that follows a plan on a TCP address, at 30 times
// life's speed.
func benchOnTCP(t *testing.T, plan string, change func(*simrig.BenchConfig)) (port string) {
	t.Helper()
	p, err := gauge.ParsePlan([]byte(plan))
	if err != nil {
		t.Fatal(err)
	}
	c := followedPlan(p)
	c.Seed, c.Reference.Serial = 5, "QF-R-0031"
	c.Boards = []simrig.BoardSpec{{QueueBytes: 30 * queueBytes}}
	change(&c)
	rig, err := simrig.NewBench(c)
	if err != nil {
		t.Fatal(err)
	}
	end, err := openListener("127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	served := make(chan error, 1)
	go func() { served <- end.serve(ctx, rig.Boards()[0], acquire.NewClock(30)) }()
	t.Cleanup(func() {
		cancel()
		<-served // ended by the context
		end.close()
	})
	return end.name
}

// benchFolder is a folder with a profile and the quick plan.
func benchFolder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for name, text := range map[string]string{"mill.toml": string(mill.Example()), "quick.toml": quickPlan} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// killBench starts a test and kills it once so many points are on disk.
func killBench(t *testing.T, dir, port string, points int) {
	t.Helper()
	cmd := exec.Command("tautramp", "bench", "--plan", "quick.toml", "--instrument", "pressure transducer", "--reference", "bench reference",
		"--limit", "shop gauge", "--range", "1000 psi", "--port", port, "--speed", killSpeed, "--out", "first.ramp")
	cmd.Dir = dir
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	first := filepath.Join(dir, "first.ramp")
	for end := time.Now().Add(60 * time.Second); pointsIn(first) < points; time.Sleep(10 * time.Millisecond) {
		if time.Now().After(end) {
			t.Error("so many points were not taken")
			break
		}
	}
	if err := cmd.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	cmd.Wait() // killed: the error says only that
}

// pointsIn counts the points that a recording holds on disk.
func pointsIn(path string) int {
	rec, err := recording.ReadFile(path)
	if err != nil {
		return 0
	}
	n := 0
	for _, e := range rec.Entries {
		if e.Event != nil && e.Event.Kind == recording.Taken && strings.HasPrefix(e.Event.Text, "point ") {
			n++
		}
	}
	return n
}

func eventsIn(t *testing.T, path string, kind recording.EventKind) (texts []string) {
	t.Helper()
	rec, err := recording.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range rec.Entries {
		if e.Event != nil && e.Event.Kind == kind {
			texts = append(texts, e.Event.Text)
		}
	}
	return texts
}

func continueBench(t *testing.T, dir, port string) {
	t.Helper()
	cmd := exec.Command("tautramp", "bench", "--continue", "first.ramp", "--port", port, "--speed", killSpeed, "--out", "second.ramp")
	cmd.Dir = dir
	if out, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
}

// wholeTest wants the nineteen points of both recordings together.
func wholeTest(t *testing.T, dir string) {
	t.Helper()
	res, meta, err := computeBench(filepath.Join(dir, "second.ramp"))
	if err != nil {
		t.Fatal(err)
	}
	if n := len(res.Test.Points); n != 19 || res.Missing != 0 {
		t.Errorf("%d points, %d missing", n, res.Missing)
	}
	if first, err := recording.ReadFile(filepath.Join(dir, "first.ramp")); err != nil || first.Outcome != recording.Torn || meta.Continues != first.Seal {
		t.Errorf("the first recording is %+v (%v), the second continues %s", first.Outcome, err, meta.Continues)
	}
	for i, p := range res.Test.Points {
		if want := min(i, 18-i); p.Index != want {
			t.Errorf("point %d is of mark %d, want %d", i, p.Index, want)
		}
	}
}

// TestKilledBenchGoesOnAtTheNextPoint kills the program in the middle of a rise
// while the operator keeps everything as it is.
func TestKilledBenchGoesOnAtTheNextPoint(t *testing.T) {
	for _, points := range []int{3, 12} {
		if testing.Short() && points != 3 {
			continue
		}
		dir := benchFolder(t)
		port := benchOnTCP(t, quickPlan, func(*simrig.BenchConfig) {})
		killBench(t, dir, port, points)
		kept := pointsIn(filepath.Join(dir, "first.ramp"))
		continueBench(t, dir, port)
		wholeTest(t, dir)
		second := filepath.Join(dir, "second.ramp")
		if again := eventsIn(t, second, recording.Again); len(again) > 0 {
			t.Errorf("the series started again: %q", again)
		}
		if n := pointsIn(second); kept+n != 19 {
			t.Errorf("%d points before the kill and %d after", kept, n)
		}
	}
}

// TestKilledBenchThatWentBackStartsItsSeriesAgain lets the pressure out while
// nobody listens.
func TestKilledBenchThatWentBackStartsItsSeriesAgain(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	dir := benchFolder(t)
	port := benchOnTCP(t, quickPlan, func(c *simrig.BenchConfig) { c.Alone = simrig.AloneLetsDown })
	killBench(t, dir, port, 4)
	time.Sleep(time.Second) // of 30 of the bench's: the pressure is out
	continueBench(t, dir, port)
	wholeTest(t, dir)
	second := filepath.Join(dir, "second.ramp")
	if again := eventsIn(t, second, recording.Again); len(again) != 1 || !strings.Contains(again[0], "it has gone back meanwhile, the series starts again") {
		t.Errorf("started again: %q", again)
	}
	if n := pointsIn(second); n != 19 {
		t.Errorf("%d points in the second recording", n)
	}
}

// TestWhatCannotBeContinued: a finished test has nothing left to do; and the recordings
// of one test must stay together.
func TestWhatCannotBeContinued(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	dir := benchFolder(t)
	port := benchOnTCP(t, quickPlan, func(*simrig.BenchConfig) {})
	killBench(t, dir, port, 2)
	continueBench(t, dir, port)
	for args, code := range map[string]int{
		"bench --continue second.ramp --port " + port + " --speed 30":                             23,
		"bench --continue second.ramp --port " + port + " --plan dial":                            2,
		"bench --continue first.ramp --port " + port + " --speed 30 --out elsewhere/another.ramp": 2,
		"bench --continue first.ramp --port " + port:                                              2,
		"bench --continue quick.toml --port " + port:                                              7,
	} {
		cmd := exec.Command("tautramp", strings.Fields(args)...)
		cmd.Dir = dir
		out, _ := cmd.CombinedOutput() // its exit code is what is looked at
		if got := cmd.ProcessState.ExitCode(); got != code {
			t.Errorf("%s: exit code %d, want %d\n%s", args, got, code, out)
		}
	}
	if err := os.Remove(filepath.Join(dir, "first.ramp")); err != nil {
		t.Fatal(err)
	}
	if _, _, err := computeBench(filepath.Join(dir, "second.ramp")); classify(err).code != 23 {
		t.Errorf("without the first recording: %v", err)
	}
}
