package pairing

import (
	"math"
	"reflect"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// pressing writes one press of a button, held so long.
func (b *board) pressing(t, heldS float64) {
	b.put(t, protocol.Button{ID: '1', Seq: b.seq, Tick: b.tick(t), Down: true})
	b.seq++
	b.put(t+heldS, protocol.Button{ID: '1', Seq: b.seq, Tick: b.tick(t + heldS)})
	b.seq++
}

func declaredOf(marks []Mark) (texts []string) {
	for _, m := range marks {
		if m.As != "" {
			texts = append(texts, string(m.As)+" "+m.Declared)
		}
	}
	return texts
}

// Presses take the declared marks in order and begin again after the last; a
// long press takes itself and the one before it back, an undo the last one,
// and a zero mark takes none.
func TestPressesTakeTheDeclaredMarks(t *testing.T) {
	h := header(t, 1)
	h.Presses = recording.Presses{As: recording.PressDial, Marks: []string{"600 psi", "700 psi", "800 psi"}}
	b := oneBoard(t, 5)
	b.pressing(10, 0.2)
	b.pressing(14, 0.2) // wrong: taken back by the long one
	b.pressing(16, 1.6)
	b.pressing(20, 1.4)
	b.pressing(24, 0.2)
	b.pressing(28, 0.2)
	set := build(t, h, together(b.lines, []recording.Entry{event(-1, 12*time.Second, recording.ZeroMark, ""),
		event(-1, 30*time.Second, recording.Undo, ""), event(-1, 32*time.Second, recording.Mark, "typed")}))
	want := []string{"dial 600 psi", "dial 700 psi", "dial 800 psi", "dial 600 psi"}
	if got := declaredOf(set.Marks); !reflect.DeepEqual(got, want) {
		t.Errorf("presses stand for %q, want %q", got, want)
	}
	near(t, "the mark for 700 psi", set.Marks[2].T, 20, 0.01)
}

// Without a declaration a long press is a mark as it always was.
func TestPlainPressesStandForNothing(t *testing.T) {
	b := oneBoard(t, 5)
	b.pressing(10, 5)
	set := build(t, header(t, 1), b.lines)
	if len(set.Marks) != 1 || set.Marks[0].As != "" || set.Marks[0].Declared != "" {
		t.Errorf("marks: %+v", set.Marks)
	}
}

// A stream gives each reading and each edge once, and how long a button was
// held by its device's clock, however late its lines come in.
func TestStreamGivesReadingsAndEdges(t *testing.T) {
	b := oneBoard(t, 5)
	b.pressing(10, 1.6)
	s := NewStream(header(t, 1))
	readings, presses := map[Source]int{}, []Press(nil)
	for _, e := range b.lines {
		heard := s.Add(e)
		if heard.Reading.Status != 0 {
			readings[heard.Source]++
		}
		if heard.Press.ID != 0 {
			presses = append(presses, heard.Press)
		}
	}
	if n := len(s.Channels()); n != 2 || len(readings) != 2 || readings[Source{0, 'a'}] == 0 || readings[Source{0, 'b'}] == 0 {
		t.Errorf("%d channels, readings %v", n, readings)
	}
	if len(presses) != 2 || !presses[0].Down || presses[1].Down || !presses[1].IsLong() || math.Abs(presses[1].HeldS-1.6) > 0.001 {
		t.Errorf("presses %+v", presses)
	}
}

// Where the presses tell the setting, pairs are made of the readings just
// before each press, of a band that stands still, and of no others.
func TestSteppedSettingPairsAtThePressesAlone(t *testing.T) {
	h := header(t, 1)
	h.Presses = recording.Presses{As: recording.PressStep, Marks: []string{"0 psi", "100 psi", "200 psi", "100 psi"}, Doubt: "4 psi"}
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CausePower, 1, extensionChan('b', 100_000))
	// It turns for five seconds of each ten, and stands for the other five.
	stretch := func(s float64) int32 {
		n, part := math.Modf(s / 10)
		return int32(40 * (n + math.Min(1, 2*part)))
	}
	next := 0
	presses := []float64{9.5, 19.5, 29.5, 34}
	for s := 0.1; s < 40; s += 0.1 {
		b.val(s, 'b', stretch(s))
		if next < len(presses) && s >= presses[next] {
			b.pressing(s+0.01, 0.05)
			next++
		}
	}
	set := build(t, h, b.lines)
	if !set.Stepped || len(set.Setting.Readings) != 4 || math.Round(set.Setting.Readings[3].Value/psiPa) != 100 {
		t.Fatalf("setting: %+v", set.Setting.Readings)
	}
	count := map[float64]int{}
	for _, p := range set.Pairs {
		psi := math.Round(p.Setting / psiPa)
		count[psi]++
		if psi == 200 {
			near(t, "its doubt", p.SettingStd, 4*psiPa*math.Sqrt(5), 1)
		}
	}
	// Five readings of each rest; the fourth press comes while it turns, and only
	// the two readings next to it lie within a count and a half.
	if want := map[float64]int{0: 5, 100: 5 + 2, 200: 5}; !reflect.DeepEqual(count, want) {
		t.Errorf("pairs by setting: %v, want %v", count, want)
	}
	near(t, "the doubt of a step", set.StepStd, 4*psiPa, 1)
	live, err := NewLive(h)
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for _, e := range b.lines {
		for _, p := range live.Add(e) {
			if n++; p.Setting != 0 && p.T < 19.4 {
				t.Fatalf("at %.1f s the live setting is %.0f psi", p.T, p.Setting/psiPa)
			}
		}
	}
	if standing, next := live.Presses(); n < 250 || standing != 4 || next != "0 psi" {
		t.Errorf("%d live pairs, %d presses, next %q", n, standing, next)
	}
}
