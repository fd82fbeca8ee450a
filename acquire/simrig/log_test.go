package simrig

import (
	"bytes"
	"errors"
	"math"
	"testing"

	"tautramp/protocol"
)

func logOf(t testing.TB, c Config) []byte {
	t.Helper()
	var text bytes.Buffer
	if err := mustNew(t, c).WriteLog(&text); err != nil {
		t.Fatal(err)
	}
	return text.Bytes()
}

func TestLogIsOneRunOfOneBoard(t *testing.T) {
	c := quick(t)
	c.Presses = []Press{{AtS: 5}}
	list := records(t, logOf(t, c))
	if words(list[:5]) != "here chan note val" {
		t.Errorf("a log begins with %s", words(list[:5]))
	}
	if here := list[0].(protocol.Here); !here.Running || here.Cause != protocol.CausePower {
		t.Errorf("here %+v", here)
	}
	if sequence(t, list) != 0 {
		t.Errorf("%d numbers missing", sequence(t, list))
	}
	if len(only[protocol.Did](list)) != 0 || len(only[protocol.Button](list)) != 2 || len(only[protocol.Unknown](list)) < 10 {
		t.Errorf("%d answers, %d button edges, %d unknown records", len(only[protocol.Did](list)),
			len(only[protocol.Button](list)), len(only[protocol.Unknown](list)))
	}
	last := map[byte]uint32{}
	for _, v := range only[protocol.Val](list) {
		if before, ok := last[v.Channel]; ok && int32(v.Tick-before) <= 0 {
			t.Fatalf("ticks of channel %c fall: %d after %d", v.Channel, v.Tick, before)
		}
		last[v.Channel] = v.Tick
	}
}

// What the wire says is what happened: pressure within its noise, extension
// within its count, at the stamped instants.
func TestLogCarriesTheTruth(t *testing.T) {
	c := quick(t)
	r, trace := mustTrace(t, c)
	list := records(t, logOf(t, c))
	here, chans := list[0].(protocol.Here), only[protocol.Chan](list)
	var squares float64
	n, checked := 0, 0
	for _, v := range only[protocol.Val](list) {
		i := float64(int32(v.Tick-here.Up)) * 1e-6 / 0.05
		if int(i)+1 >= len(trace) {
			continue
		}
		a, b, part := trace[int(i)], trace[int(i)+1], i-math.Floor(i)
		si := protocol.ToSI(chans[v.Channel-'a'], v.Count)
		if v.Channel == 'a' {
			off := (si - a.PressurePa - part*(b.PressurePa-a.PressurePa)) / psiPa
			squares += off * off
			n++
			continue
		}
		checked++
		// Half a count, 0.64 um, and five times the 0.1 um of noise; the window's
		// mean differs from its middle by less.
		off := si - r.Truth().ZeroM - a.ExtensionM - part*(b.ExtensionM-a.ExtensionM)
		near(t, "extension off by, um", off*1e6, 0, 0.64+0.5+0.1)
	}
	near(t, "spread of the pressure, psi", math.Sqrt(squares/float64(n)), 1, 0.1)
	if checked < 800 {
		t.Errorf("%d extensions checked", checked)
	}
}

func TestSeedDecidesEverything(t *testing.T) {
	c := quick(t)
	c.Drive.TopPa = 200 * psiPa
	first, again := logOf(t, c), logOf(t, c)
	if !bytes.Equal(first, again) {
		t.Error("the same seed gave two logs")
	}
	r := mustNew(t, c)
	var twice bytes.Buffer
	for range 2 {
		if err := r.WriteLog(&twice); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(twice.Bytes(), append(first, again...)) {
		t.Error("one rig wrote two different logs")
	}
	c.Seed++
	if bytes.Equal(first, logOf(t, c)) {
		t.Error("another seed gave the same log")
	}
}

type fullCard struct{ room int }

var errFull = errors.New("card full")

func (f *fullCard) Write(p []byte) (int, error) {
	if f.room -= len(p); f.room < 0 {
		return 0, errFull
	}
	return len(p), nil
}

func TestLogNeedsRoomOneBoardAndAnEnd(t *testing.T) {
	c := quick(t)
	if err := mustNew(t, c).WriteLog(&fullCard{5000}); !errors.Is(err, errFull) {
		t.Errorf("full card: %v", err)
	}
	c.Boards = []BoardSpec{{}, {}}
	if err := mustNew(t, c).WriteLog(&fullCard{}); !errors.Is(err, ErrConfig) {
		t.Errorf("two boards: %v", err)
	}
	c.Boards, c.Drive.Shape = nil, Still
	if err := mustNew(t, c).WriteLog(&fullCard{}); !errors.Is(err, ErrConfig) {
		t.Errorf("drive without an end: %v", err)
	}
}
