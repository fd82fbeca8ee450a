package main

import (
	"bytes"
	"context"
	"net"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
)

// captureFrom runs "tautramp capture" in this process against a port.
func captureFrom(t *testing.T, portName, out string, more ...string) (code int, stderr string) {
	t.Helper()
	var screen, errs bytes.Buffer
	e := env{stdout: &screen, stderr: &errs, clock: acquire.NewClock, wall: time.Now}
	args := append([]string{"capture", "--mill", writeExample(t), "--tensioner", "T-1", "--band", "QW-6", "--port", portName, "--out", out}, more...)
	code = run(context.Background(), args, e)
	return code, errs.String()
}

// serverSaying accepts one caller on TCP and says text to it, again and again.
func serverSaying(t *testing.T, text string) string {
	t.Helper()
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { listener.Close() })
	go func() {
		conn, err := listener.Accept()
		if err != nil {
			return // the test is over
		}
		defer conn.Close()
		for {
			if _, err := conn.Write([]byte(text)); err != nil {
				return // the capture hung up
			}
			time.Sleep(5 * time.Millisecond)
		}
	}()
	return "tcp://" + listener.Addr().String()
}

func TestGarbageOnTheLineIsNamedAsSuch(t *testing.T) {
	out := filepath.Join(t.TempDir(), "garbage.ramp")
	code, stderr := captureFrom(t, serverSaying(t, "\x00\xffKJh87%&\r\n"), out, "--speed", "10")
	if code != 6 || !strings.Contains(stderr, "no line of ours") || !strings.Contains(stderr, "next:") {
		t.Errorf("exit code %d, want 6\n%s", code, stderr)
	}
}

// TestAPortThatVanishesMidRampLosesNothing unplugs the board for good while
// the pressure rises on the second cycle.
func TestAPortThatVanishesMidRampLosesNothing(t *testing.T) {
	needTerminals(t)
	const speed, enough = 60, 9000 // entries: the second cycle rises
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Seed: 4})
	if err != nil {
		t.Fatal(err)
	}
	pair, err := port.NewPair()
	if err != nil {
		t.Fatal(err)
	}
	clock := acquire.NewClock(speed)
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	out := filepath.Join(t.TempDir(), "vanished.ramp")
	unplugged := make(chan error, 1)
	go func() {
		waitForEntries(t, out, enough)
		unplugged <- pair.Unplug()
	}()
	served := make(chan error, 1)
	go func() { served <- rig.Boards()[0].Serve(ctx, pair, clock) }()
	code, stderr := captureFrom(t, pair.Path, out, "--speed", "60", "--patience", "1s")
	<-served // the port went, as it should
	if err := <-unplugged; err != nil {
		t.Error(err)
	}
	if code != 5 || !strings.Contains(stderr, "did not come back") || !strings.Contains(stderr, "tautramp analyze "+out) {
		t.Errorf("exit code %d, want 5\n%s", code, stderr)
	}
	rec, err := recording.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	if rec.Outcome != recording.Complete || len(rec.Entries) < enough {
		t.Errorf("%s, %d entries, %d had come before", rec.Outcome, len(rec.Entries), enough)
	}
}
