package pairing

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"sort"
	"strconv"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// The invented rig of these tests: pressure in 0.1 psi, extension in
// 0.00005 in, as in the worked exchange of protocol/SPEC.md.
const (
	psiPa = 6894.757293168361
	inM   = 0.0254
)

func header(t testing.TB, devices int) recording.Header {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	h := recording.Header{Source: recording.Live, ClockFactor: 1, Tensioner: p.Tensioners[0].Name, Parsed: p, Plan: recording.Plan{Exercise: 1, Ramps: 3}}
	for i := range devices {
		h.Devices = append(h.Devices, fmt.Sprintf("port%d", i))
	}
	return h
}

func wire(t testing.TB, r protocol.Record) []byte {
	t.Helper()
	line, err := protocol.Append(nil, r)
	if err != nil {
		t.Fatalf("%+v: %v", r, err)
	}
	return line[:len(line)-1]
}

func pressureChan(id byte, period uint32) protocol.Chan {
	return protocol.Chan{ID: id, Quantity: protocol.Pressure, Unit: "[psi]", Mantissa: 1, Exponent: -1, Low: -200, High: 15200, Res: 1, Period: period, Shows: protocol.ShowsRounded}
}

func extensionChan(id byte, period uint32) protocol.Chan {
	return protocol.Chan{ID: id, Quantity: protocol.Extension, Unit: "[in_i]", Mantissa: 5, Exponent: -5, Low: -1000, High: 19000, Res: 1, Period: period, Shows: protocol.ShowsRounded}
}

// board is a simulated device's clock and numbering: its tick at true time t is
// start + hz (1 + ppm/1e6) t.
type board struct {
	t      testing.TB
	index  int
	hz     float64
	ppm    float64
	start  uint32
	seq    uint16
	imp    bool // no receive times
	lines  []recording.Entry
	delayS func(t float64) float64 // from the sample to the receive time
}

func (b *board) tick(t float64) uint32 {
	return b.start + uint32(int64(math.Round(b.hz*(1+b.ppm/1e6)*t)))
}

// put sends a record made at true time t.
func (b *board) put(t float64, r protocol.Record) {
	at := 0.0
	if !b.imp {
		at = t + b.delayS(t)
		if n := len(b.lines); n > 0 { // one port keeps the order
			at = math.Max(at, b.lines[n-1].At.Seconds())
		}
	}
	b.lines = append(b.lines, recording.Entry{Device: b.index, At: time.Duration(at * 1e9), HasAt: !b.imp, Wire: wire(b.t, r)})
}

func (b *board) hello(t float64, cause protocol.Cause, boot uint32, chans ...protocol.Chan) {
	b.put(t, protocol.Here{Version: 1, Model: "two-port", Serial: "000" + strconv.Itoa(b.index), TickHz: uint32(b.hz), Channels: len(chans), Up: b.tick(t), Cause: cause, Boot: boot, HasBoot: boot != 0})
	for _, c := range chans {
		b.put(t, c)
	}
}

func (b *board) val(t float64, channel byte, count int32) { b.status(t, channel, protocol.Good, count) }

func (b *board) status(t float64, channel byte, s protocol.Status, count int32) {
	v := protocol.Val{Channel: channel, Seq: b.seq, Tick: b.tick(t), Status: s, Count: count, HasCount: s == protocol.Good || s == protocol.Low || s == protocol.High}
	if !v.HasCount {
		v.Count = 0
	}
	b.seq++
	b.put(t, v)
}

func noDelay(float64) float64 { return 0 }

// usbDelay is an exponential delay of 5 ms on average, after which a bridge
// hands over what it holds every 16 ms; its beat has its own phase.
func usbDelay(rng *rand.Rand) func(float64) float64 {
	phase := rng.Float64() * 0.016
	return func(t float64) float64 {
		ready := t + rng.ExpFloat64()*0.005
		return math.Ceil((ready-phase)/0.016)*0.016 + phase - t
	}
}

// together sorts the lines of boards and events by receive time; each board's
// own order is kept.
func together(lists ...[]recording.Entry) []recording.Entry {
	all := slices.Concat(lists...)
	sort.SliceStable(all, func(i, j int) bool { return all[i].At < all[j].At })
	return all
}

func event(device int, at time.Duration, kind recording.EventKind, text string) recording.Entry {
	return recording.Entry{Device: device, At: at, HasAt: true, Event: &recording.Event{Kind: kind, Text: text}}
}

func build(t testing.TB, h recording.Header, entries []recording.Entry) *Set {
	t.Helper()
	set, err := FromRecording(&recording.Recording{Header: h, Entries: entries})
	if err != nil {
		t.Fatal(err)
	}
	return set
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %g, want %g within %g", what, got, want, tolerance)
	}
}
