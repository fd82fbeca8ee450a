package pairing

import (
	"math"
	"testing"

	"tautramp/protocol"
)

// Opposite bends of 300 millionths on the two faces cancel in their mean.
func TestMeanOfBothFacesCancelsABend(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	front, back := extensionChan('b', 100000), extensionChan('c', 100000)
	front.Face, back.Face = 'A', 'B'
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), front, back)
	least := protocol.LeastSI(front)
	bend := int32(300e-6 * 0.508 / least)
	for i := range 200 {
		at := 1 + float64(i)*0.05
		stretch := int32(1000 + 10*i)
		b.val(at, 'a', int32(100*i))
		b.val(at, 'b', stretch+bend)
		b.val(at+0.02, 'c', stretch+4-bend) // 0.02 s later it is 4 counts on
	}
	set := build(t, header(t, 1), b.lines)
	if !set.BothFaces || len(set.Warnings) != 0 || len(set.Pairs) < 190 {
		t.Fatalf("both faces %v, %d pairs, %q", set.BothFaces, len(set.Pairs), set.Warnings)
	}
	for i, p := range set.Pairs[5:190] {
		stretch := (1000 + 10*(p.T-1)/0.05) * least
		if off := math.Abs(p.Extension-stretch) / 0.508; off > 5e-6 {
			t.Fatalf("pair %d: %.1f millionths of the bend are left", i, off*1e6)
		}
	}
}

func TestOtherSpanIsNoOtherFace(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	front, back := extensionChan('b', 100000), extensionChan('c', 100000)
	front.Face, back.Face, front.Span, back.Span = 'A', 'B', 1, 2
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), front, back)
	for i := range 20 {
		b.val(1+float64(i)*0.05, 'a', int32(i))
		b.val(1+float64(i)*0.05, 'b', int32(i))
		b.val(1+float64(i)*0.05, 'c', 5000)
	}
	if set := build(t, header(t, 1), b.lines); set.BothFaces || len(set.Warnings) != 1 {
		t.Errorf("both faces %v, %q", set.BothFaces, set.Warnings)
	}
}
