package main

import (
	"bytes"
	"context"
	"flag"
	"path/filepath"
	"runtime"
	"sync"
	"testing"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
)

var soak = flag.Duration("soak", 20*time.Second, "how long TestThousandLinesASecond runs; the noted figure is of 5m")

// TestThousandLinesASecond captures two boards at 1,000 lines a second each
// through pseudo-terminals: no line lost, and memory that does not grow.
func TestThousandLinesASecond(t *testing.T) {
	needTerminals(t)
	if testing.Short() {
		t.Skip("takes 20 s; the full run has it")
	}
	const perBoard = 1000
	clock := acquire.NewClock(1)
	ctx, stop := context.WithTimeout(context.Background(), *soak)
	defer stop()
	devices, names := loadBoards(t, perBoard, clock)
	path := filepath.Join(t.TempDir(), "soak.ramp")
	var screen bytes.Buffer
	heaps := watchHeap(ctx, *soak/10)
	err := record(ctx, recordJob{header: soakHeader(names), path: path, devices: devices, system: mill.US, clock: clock},
		env{stdout: &screen, stderr: &screen})
	if err != nil {
		t.Fatal(err)
	}
	checkSoak(t, path, perBoard)
	first, last := heaps()
	t.Logf("heap %.1f MB after a fifth, %.1f MB at the end", first, last)
	if last > first+8 {
		t.Errorf("the heap grew from %.1f to %.1f MB", first, last)
	}
}

func soakHeader(names []string) recording.Header {
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		panic(err) // the example is tested on its own
	}
	return recording.Header{Program: "test", Started: time.Now(), Source: recording.Live, ClockFactor: 1, Devices: names,
		Tensioner: "T-1", Band: "QW-6", Profile: mill.Example(), Parsed: profile}
}

// loadBoards serves two boards of a still rig on pseudo-terminals.
func loadBoards(t *testing.T, perBoard int, clock acquire.Clock) (devices []acquire.Device, names []string) {
	t.Helper()
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Load: perBoard,
		Drive: simrig.Drive{Shape: simrig.Still}, Boards: []simrig.BoardSpec{{}, {TickPPM: 300}}})
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	var served sync.WaitGroup
	for _, board := range rig.Boards() {
		pair, err := port.NewPair()
		if err != nil {
			t.Fatal(err)
		}
		served.Go(func() {
			if err := board.Serve(ctx, pair, clock); err != nil {
				t.Error(err)
			}
		})
		names = append(names, pair.Path)
		devices = append(devices, acquire.Device{Name: pair.Path, Dial: port.Dialer(pair.Path, port.Options{})})
	}
	t.Cleanup(func() { cancel(); served.Wait() })
	return devices, names
}

// watchHeap looks at the live heap now and then; the function it returns gives
// the second look and the last one, in MB.
func watchHeap(ctx context.Context, every time.Duration) func() (second, last float64) {
	var looks []float64
	done := make(chan struct{})
	go func() {
		defer close(done)
		for ticker := time.NewTicker(every); ; {
			select {
			case <-ctx.Done():
				return
			case <-ticker.C:
				runtime.GC()
				var m runtime.MemStats
				runtime.ReadMemStats(&m)
				looks = append(looks, float64(m.HeapAlloc)/1e6)
			}
		}
	}()
	return func() (float64, float64) {
		<-done
		return looks[1], looks[len(looks)-1]
	}
}

func checkSoak(t *testing.T, path string, perBoard int) {
	t.Helper()
	rec, err := recording.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if rec.Outcome != recording.Complete {
		t.Errorf("the recording is %s", rec.Outcome)
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	if len(set.Counters) != 2 {
		t.Fatalf("%d devices counted", len(set.Counters))
	}
	running := *soak - 4*time.Second // the ports open and the boards boot first
	for _, c := range set.Counters {
		t.Logf("board %d: %d samples, %d lost, %d dropped by itself, %d refused", c.Device+1, c.Samples, c.Lost, c.DeviceSaid, c.Rejected)
		if c.Lost != 0 || c.DeviceSaid != 0 || c.Rejected != 0 || c.Samples < int(running.Seconds())*perBoard {
			t.Errorf("board %d lost lines, or sent too few", c.Device+1)
		}
	}
}
