package main

import (
	"context"
	"fmt"
	"math/rand/v2"
	"os/exec"
	"path/filepath"
	"testing"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/protocol"
)

// TestKilledCaptureLosesAtMostTheSyncInterval kills a capture at random
// instants, as a power cut would not ask either, and looks at what the board
// had sent by then and what the file holds.
func TestKilledCaptureLosesAtMostTheSyncInterval(t *testing.T) {
	needTerminals(t)
	kills := 20
	if testing.Short() {
		kills = 3
	}
	rng := rand.New(rand.NewPCG(9, 9))
	for i := range kills {
		after := 300*time.Millisecond + time.Duration(rng.Int64N(int64(2*time.Second)))
		t.Run(fmt.Sprintf("kill %d after %v", i, after), func(t *testing.T) {
			t.Parallel()
			killOnce(t, after)
		})
	}
}

// startTick is where the board's ticks, of a microsecond each, begin.
const startTick = 1000

func killOnce(t *testing.T, after time.Duration) {
	portName, clock := boardForKilling(t)
	path := filepath.Join(t.TempDir(), "killed.ramp")
	millFile := writeExample(t)
	cmd := exec.Command("tautramp", "capture", "--mill", millFile, "--tensioner", "T-1", "--band", "QW-6", "--port", portName, "--out", path)
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	waitForEntries(t, path, 50)
	time.Sleep(after)
	sentUntil := clock.Now()
	if err := cmd.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	cmd.Wait() // killed: the error says only that

	rec, err := recording.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if rec.Outcome != recording.Torn {
		t.Errorf("outcome %s, want torn", rec.Outcome)
	}
	// The sync is due every half second; a busy machine may run it late.
	const late = 400 * time.Millisecond
	if lost := sentUntil - lastSampleAt(t, rec); lost > syncEveryReal+late {
		t.Errorf("%v lost, want at most %v and %v for a busy machine", lost, syncEveryReal, late)
	}
}

// boardForKilling streams 200 lines a second on a pseudo-terminal.
func boardForKilling(t *testing.T) (string, acquire.Clock) {
	t.Helper()
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Load: 200,
		Boards: []simrig.BoardSpec{{StartTick: startTick}}})
	if err != nil {
		t.Fatal(err)
	}
	pair, err := port.NewPair()
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	clock := acquire.NewClock(1)
	served := make(chan error, 1)
	go func() { served <- rig.Boards()[0].Serve(ctx, pair, clock) }()
	t.Cleanup(func() {
		cancel()
		<-served // ended by the context
		pair.Close()
	})
	return pair.Path, clock
}

// waitForEntries waits until a recording holds more than so many sealed
// entries.
func waitForEntries(t *testing.T, path string, least int) {
	t.Helper()
	for end := time.Now().Add(20 * time.Second); time.Now().Before(end); time.Sleep(20 * time.Millisecond) {
		rec, err := recording.ReadFile(path)
		if err == nil && len(rec.Entries) > least {
			return
		}
	}
	t.Errorf("the capture recorded no %d entries", least)
}

func lastSampleAt(t *testing.T, rec *recording.Recording) time.Duration {
	t.Helper()
	for i := len(rec.Entries) - 1; i >= 0; i-- {
		record, bad := protocol.Parse(rec.Entries[i].Wire)
		if val, ok := record.(protocol.Val); ok && bad == nil {
			return time.Duration(val.Tick-startTick) * time.Microsecond
		}
	}
	t.Fatal("no sample in the recording")
	return 0
}
