package sim_test

import (
	"bytes"
	"io"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/firmware-notes/sim"
	"tautramp/protocol"
)

// The long log: half an hour, a reset, a line that is too busy for a while.
const (
	logS      = 1800.0
	resetS    = 1200.25
	busyFromS = 600.0
	busyToS   = 606.0
	wrapS     = 60.0 // after each boot
	startTick = 1<<32 - 60_000_000
)

// TestHalfAnHourAcrossTheWrap lets a logging board write 100 lines a second, flat
// out, to a file, and reads it through the program's import: across the wrap of
// its tick, a reset, and a line too busy for what it has to say.
func TestHalfAnHourAcrossTheWrap(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	n, host := notes(t), program(t)
	harness := got(n.Harness())(t)
	image := got(n.AVR("quadrature-115200.elf", "-DSTART_TICK=0xfc6c7900u", "-DRUNNING=1"))(t)
	rig := ramps(t, func(c *simrig.Config) { c.Drive.Ramps = 12 })
	s := signals(t, rig, 20)
	log := filepath.Join(t.TempDir(), "log.txt")
	logged(t, harness, image, s, log)
	data, err := os.ReadFile(log)
	if err != nil {
		t.Fatal(err)
	}
	dropped := sampledLog(t, s, data)
	set := imported(t, host, log)
	c := set.Counters[0]
	t.Logf("imported: %+v", c)
	if c.Lost != dropped || int(c.DeviceSaid) != dropped || c.Rejected != 0 || c.Restarts != 1 || c.Backward != 0 {
		t.Errorf("want %d lines lost by all counts, one restart, nothing refused", dropped)
	}
	inOrder(t, set)
}

// logged runs the board and keeps what it says.
func logged(t *testing.T, harness, image string, s sim.Signals, path string) {
	t.Helper()
	b := got(sim.StartAVR(harness, image, sim.AVROptions{}))(t)
	orders := []sim.Order{sim.Reset(resetS), sim.End(logS)}
	for _, boot := range []float64{0, resetS} { // pressure 5 times a second, the scale 95 times: 100 lines
		orders = append(orders, pace(t, boot+0.5, 'a', 200_000), pace(t, boot+0.6, 'b', 10_526))
	}
	orders = append(orders, pace(t, busyFromS, 'b', 2_000), pace(t, busyToS, 'b', 10_526))
	go func() {
		s.Quadrature(b.Stimulus, logS, orders...) // the board's end breaks it off
		b.Stimulus.Close()
	}()
	file, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := io.Copy(file, b.Line); err != nil {
		t.Error(err)
	}
	if err := file.Close(); err != nil {
		t.Error(err)
	}
	if f := stop(t, b); f.SimulatedS < logS || f.Boots != 2 {
		t.Error("the board has not run to the end")
	}
}

func pace(t *testing.T, at float64, channel byte, ticks uint32) sim.Order {
	t.Helper()
	line, err := protocol.AppendCommand(nil, protocol.Command{Verb: protocol.Pace, Token: byte(at), Channel: channel, Period: ticks})
	if err != nil {
		t.Fatal(err)
	}
	return sim.Host(at, line)
}

// sampledLog wants every line to be good and every sample to be what the sensors
// met at its tick, and returns how many numbers are missing.
func sampledLog(t *testing.T, s sim.Signals, data []byte) (missing int) {
	t.Helper()
	const sumStd = 8 * (0.004*1024/5 + 0.3)
	bootS, zero, next := 0.0, s.Edge(0), uint16(0)
	lines, samples, wraps, worst := 0, map[byte]int{}, 0, 0.0
	number := func(seq uint16) { missing += int(seq - next); next = seq + 1; lines++ }
	for scan := protocol.NewScanner(bytes.NewReader(data)); scan.Scan(); {
		if scan.Line().Err != nil {
			t.Errorf("%q: %v", scan.Line().Text, scan.Line().Err)
		}
		switch r := scan.Line().Record.(type) {
		case protocol.Here:
			if r.Cause == protocol.CauseReset {
				bootS, zero, next = resetS, s.Edge(resetS), 0
			}
		case protocol.Beat:
			number(r.Seq)
		case protocol.Val:
			number(r.Seq)
			samples[r.Channel]++
			since := float64(r.Tick-startTick) / 1e6 // modulo 2^32, as the tick is
			if since > wrapS {
				wraps++
			}
			pressure, _ := s.At(bootS + since)
			off := math.Abs(float64(r.Count) - 65536*sim.Volts(pressure)/5)
			if r.Channel == 'b' {
				off = offScale(s, bootS+since, r.Count+zero)
			} else {
				worst = max(worst, off)
				off = max(0, off-6*sumStd)
			}
			if r.Status != protocol.Good || off > 0 {
				t.Errorf("%+v at %.4f s is off by %.0f", r, bootS+since, off)
			}
		}
	}
	t.Logf("%d numbered lines, %d missing, samples %v, %d after a wrap; the worst pressure off by %.1f counts", lines, missing, samples, wraps, worst)
	if perSecond := float64(lines+missing) / logS; perSecond < 99 || wraps < 150_000 || missing < 500 || samples['a'] < 8_000 {
		t.Errorf("%.1f lines a second; the test has not tested what it should", perSecond)
	}
	return missing
}

// offScale is by how many steps a reading of the scale is off, allowing for an
// edge within two milliseconds.
func offScale(s sim.Signals, at float64, step int32) float64 {
	a, b := s.Edge(at-0.002), s.Edge(at+0.002)
	return float64(max(min(a, b)-step, step-max(a, b), 0))
}

// imported reads the log as the program does.
func imported(t *testing.T, host, log string) *pairing.Set {
	t.Helper()
	dir := filepath.Dir(log)
	if err := os.WriteFile(filepath.Join(dir, "mill.toml"), mill.Example(), 0o600); err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(host, "import", log, "--tensioner", "T-1", "--band", "QW-6", "--out", "log.ramp")
	cmd.Dir = dir
	if out, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("import: %v\n%s", err, out)
	}
	rec, err := recording.ReadFile(filepath.Join(dir, "log.ramp"))
	if err != nil {
		t.Fatal(err)
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	return set
}

// inOrder wants the readings' times to rise at the pace of the board's clock, but
// where the reset is.
func inOrder(t *testing.T, set *pairing.Set) {
	t.Helper()
	list, breaks := set.Extension.Readings, 0
	for i := 1; i < len(list); i++ {
		step := list[i].T - list[i-1].T
		if list[i].Part != list[i-1].Part {
			breaks++
		} else if step <= 0 || step > 0.25 {
			t.Errorf("%.4f s from reading %d to the next, at %.3f s", step, i-1, list[i].T)
		}
	}
	if breaks != 1 || len(list) < 150_000 {
		t.Errorf("%d readings with %d breaks", len(list), breaks)
	}
}
