package sim_test

import (
	"bytes"
	"context"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"sync"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
	"tautramp/firmware-notes/sim"
	"tautramp/protocol"
)

// capture runs the program's capture on a port until it ends by itself, and
// reads its recording.
func capture(t *testing.T, program, portName string, speed float64, ramps int) *recording.Recording {
	t.Helper()
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "mill.toml"), mill.Example(), 0o600); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(t.Context(), 100*time.Second)
	defer cancel()
	cmd := exec.CommandContext(ctx, program, "capture", "--port", portName, "--speed", fmt.Sprint(speed),
		"--tensioner", "T-1", "--band", "QW-6", "--exercise", "1", "--ramps", fmt.Sprint(ramps), "--out", "visit.ramp")
	cmd.Dir = dir
	cmd.Cancel = func() error { return cmd.Process.Signal(os.Interrupt) }
	cmd.WaitDelay = 5 * time.Second
	out, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("capture: %v\n%s", err, tail(out))
	}
	rec, err := recording.ReadFile(filepath.Join(dir, "visit.ramp"))
	if err != nil {
		t.Fatal(err)
	}
	if rec.Outcome != recording.Complete {
		t.Errorf("the recording is %s", rec.Outcome)
	}
	return rec
}

func tail(out []byte) []byte { return out[max(0, len(out)-3000):] }

// agrees analyses a recording and wants both branches within 1 % of what was
// planted, and within their own intervals.
func agrees(t *testing.T, rec *recording.Recording, truth simrig.Truth) *pairing.Set {
	t.Helper()
	set, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	res, err := analyze.Analyze(analyze.Input{Profile: rec.Header.Parsed, Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	target := res.Setup.TargetPa
	within(t, "rising setting", res.AtRising.TrueSI, truth.RisingPa(target))
	within(t, "falling setting", res.AtFalling.TrueSI, truth.FallingPa(target))
	return set
}

func within(t *testing.T, what string, got estimate.Estimate, truth float64) {
	t.Helper()
	if !got.Known() {
		t.Errorf("%s is not known: %s", what, got.Why)
		return
	}
	lo, hi := got.Interval95()
	t.Logf("%s: %.2f psi, planted %.2f (%+.2f %%), 95 %% from %.2f to %.2f", what, got.Value/psi, truth/psi, (got.Value/truth-1)*100, lo/psi, hi/psi)
	if math.Abs(got.Value/truth-1) > 0.01 || truth < lo || truth > hi {
		t.Errorf("%s is wrong", what)
	}
}

// sent is all that a board has put on its line, before anything befell it.
type sent struct {
	mu    sync.Mutex
	bytes []byte
}

func (s *sent) note(bytes []byte) {
	s.mu.Lock()
	s.bytes = append(s.bytes, bytes...)
	s.mu.Unlock()
}

// numbered are a stream's numbered lines by number; the streams here have fewer
// than 65,536.
func numbered(lines func(yield func([]byte))) map[uint16]string {
	list := map[uint16]string{}
	lines(func(text []byte) {
		record, bad := protocol.Parse(text)
		if bad != nil {
			return
		}
		switch r := record.(type) {
		case protocol.Val:
			list[r.Seq] = string(text)
		case protocol.Button:
			list[r.Seq] = string(text)
		case protocol.Beat:
			list[r.Seq] = string(text)
		}
	})
	return list
}

// compare wants every good numbered line of a recording to be one that the
// board has sent, and every other one missed by the host. It returns the good
// samples in their order, and how many lines the wire lost.
func compare(t *testing.T, rec *recording.Recording, s *sent) (samples []protocol.Val, lost int) {
	t.Helper()
	s.mu.Lock()
	defer s.mu.Unlock()
	sentLines := numbered(func(yield func([]byte)) {
		for line := range bytes.SplitSeq(s.bytes, []byte{'\n'}) {
			yield(line)
		}
	})
	got := numbered(func(yield func([]byte)) {
		for _, e := range rec.Entries {
			if e.Wire != nil {
				yield(e.Wire)
			}
		}
	})
	first, last := uint16(math.MaxUint16), uint16(0)
	for seq, text := range got {
		first, last = min(first, seq), max(last, seq)
		if sentLines[seq] != text {
			t.Errorf("undetected error: sent %q, recorded %q", sentLines[seq], text)
		}
	}
	for seq := int(first); seq <= int(last); seq++ {
		if text, ok := got[uint16(seq)]; !ok {
			lost++
		} else if v, ok := must(protocol.Parse([]byte(text))).(protocol.Val); ok {
			samples = append(samples, v)
		}
	}
	return samples, lost
}

func must(r protocol.Record, bad *protocol.SyntaxError) protocol.Record {
	if bad != nil {
		panic(bad) // it was read before
	}
	return r
}

// countedAlike wants the host's count of lost lines to be that of the wire and
// of the device.
func countedAlike(t *testing.T, set *pairing.Set, lost int) {
	t.Helper()
	c := set.Counters[0]
	t.Logf("%d lines, %d samples, %d lost on the wire, %d refused; counters %+v", c.Lines, c.Samples, lost, c.Rejected, c)
	if c.Lost != lost+int(c.DeviceSaid) {
		t.Errorf("%d lines lost by the host's count, %d by the wire's and %d by the device's", c.Lost, lost, c.DeviceSaid)
	}
	if c.Backward != 0 || c.Restarts != 0 || c.Undeclared != 0 {
		t.Errorf("%+v", c)
	}
}

func TestAnAVRMeasuresATensioner(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	const speed, spoiled = 5, 5_000
	n, host := notes(t), program(t)
	harness, image := got(n.Harness())(t), got(n.AVR("clocked-115200.elf"))(t)
	rig := ramps(t, func(c *simrig.Config) { c.Drive.RatePaS = 40 * psi })
	s := signals(t, rig, 15)
	pair, err := port.NewPair()
	if err != nil {
		t.Skip(err)
	}
	b := got(sim.StartAVR(harness, image, sim.AVROptions{Speed: speed, Seed: 5}))(t)
	var onLine sent
	spoil := sim.Spoiler(5, spoiled)
	cable := sim.NewCable(b.Line, sim.Wire{ToHost: func(bytes []byte) []byte { onLine.note(bytes); return spoil(bytes) }})
	cable.Plug(pair)
	var shown []sim.Shown
	var fed sync.WaitGroup
	fed.Go(func() {
		shown, _ = s.Clocked(b.Stimulus, s.EndS()+30) // broken off when the board is stopped
		b.Stimulus.Close()
	})
	rec := capture(t, host, pair.Path, speed, 2)
	f := stop(t, b)
	fed.Wait()
	cable.Close()
	if f.LatestS > 1 {
		t.Logf("the simulator was late by up to %.2f s", f.LatestS)
	}
	set := agrees(t, rec, rig.Truth())
	samples, lost := compare(t, rec, &onLine)
	if lost == 0 || set.Counters[0].Rejected == 0 {
		t.Error("nothing was spoiled on the wire")
	}
	countedAlike(t, set, lost)
	sampledAVR(t, s, shown, samples)
}

// sampledAVR wants each sample of an AVR to be what its sensors met: the
// indicator to the count, the pressure within six standard deviations of the
// noise in a sum of 64 readings. The tick runs from power-on, but for the start.
func sampledAVR(t *testing.T, s sim.Signals, shown []sim.Shown, samples []protocol.Val) {
	t.Helper()
	const sumStd = 8 * (0.004*1024/5 + 0.3)
	byMillisecond := map[int]int32{}
	for _, d := range shown {
		byMillisecond[int(math.Round(d.AtS*1000))] = d.Count
	}
	displays, pressures, worst := 0, 0, 0.0
	for _, v := range samples {
		at := float64(v.Tick) / 1e6
		switch {
		case v.Status != protocol.Good:
			t.Errorf("%+v", v)
		case v.Channel == 'b':
			displays++
			if want, ok := byMillisecond[int(math.Round(at*1000))]; !ok || want != v.Count {
				t.Errorf("at %.4f s the indicator has shown %d (%t), the board says %d", at, want, ok, v.Count)
			}
		default:
			pressures++
			pressure, _ := s.At(at)
			off := math.Abs(float64(v.Count) - 65536*sim.Volts(pressure)/5)
			worst = max(worst, off)
		}
	}
	t.Logf("%d displays, %d pressures, the worst off by %.1f counts of %.4f psi", displays, pressures, worst, 1500/0.8/65536)
	if worst > 6*sumStd || displays < 1000 || pressures < 5000 {
		t.Errorf("want %.1f counts at most", 6*sumStd)
	}
}

func TestACortexMMeasuresATensioner(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	host, image := program(t), got(notes(t).CortexM("cortexm3.elf"))(t)
	rig := ramps(t, func(c *simrig.Config) { // in real time: hurried
		c.SlackM, c.SlackTimeS = 1e-3, 2
		d := &c.Drive
		d.Ramps, d.RatePaS, d.LowPa, d.ExercisePa, d.RestS, d.HoldTopS, d.HoldLowS = 1, 50*psi, psi, 250*psi, 3, 2, 4
	})
	s := signals(t, rig, 6)
	s.NoisePa = psi / 2
	pair, err := port.NewPair()
	if err != nil {
		t.Skip(err)
	}
	b := got(sim.StartCortexM(image))(t)
	var onLine sent
	spoil := sim.Spoiler(6, 5_000)
	cable := sim.NewCable(b.Line, sim.Wire{ToHost: func(bytes []byte) []byte { onLine.note(bytes); return spoil(bytes) }})
	cable.Plug(pair)
	var list []sim.Fed
	var fed sync.WaitGroup
	fed.Go(func() {
		if list, err = s.Readings(b.Exited(), b.Stimulus, s.EndS()+30); err != nil {
			t.Log(err) // broken off when the board is stopped
		}
	})
	rec := capture(t, host, pair.Path, 1, 1)
	stop(t, b)
	fed.Wait()
	cable.Close()
	set := agrees(t, rec, rig.Truth())
	samples, lost := compare(t, rec, &onLine)
	countedAlike(t, set, lost)
	sampledCortexM(t, list, samples)
}

// sampledCortexM wants the samples of each channel to be readings that the
// board was given, in their order. The board's clock starts some while before
// the feeding; that while must be the same for all, but for what a busy
// computer delays.
func sampledCortexM(t *testing.T, list []sim.Fed, samples []protocol.Val) {
	t.Helper()
	const jitterS = 1.0
	count, next := map[byte]int{}, map[byte]int{}
	early, late := math.Inf(1), math.Inf(-1)
	for _, v := range samples {
		i := next[v.Channel]
		for i < len(list) && (list[i].Channel != v.Channel || list[i].Count != v.Count) {
			i++
		}
		if v.Status != protocol.Good || i == len(list) {
			t.Errorf("%+v is no reading that it was given after the one before", v)
			return
		}
		before := list[i].AtS - float64(v.Tick)/1e6
		early, late = min(early, before), max(late, before)
		next[v.Channel] = i + 1
		count[v.Channel]++
	}
	t.Logf("%d pressures, %d displays, clocks apart by %.3f to %.3f s", count['a'], count['b'], early, late)
	if count['a'] < 1000 || count['b'] < 250 {
		t.Error("too few samples")
	}
	if late-early > jitterS {
		t.Errorf("the clocks go apart by %.3f s", late-early)
	}
}
