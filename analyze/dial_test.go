package analyze

import (
	"fmt"
	"math"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
)

// shop is a mill's own dial: what it shows, in its unit, of a true setting.
type shop struct {
	unit       string
	graduation float64
	perSI      float64
	shift      float64
}

func (s shop) shows(si float64) float64 { return s.shift + s.perSI*si }

// press adds presses at the marks, a fifth of a second late, rising or falling.
func (s shop) press(set *pairing.Set, marks []float64, way Direction) {
	for i := 1; i < len(set.Pairs); i++ {
		a, b := s.shows(set.Pairs[i-1].Setting), s.shows(set.Pairs[i].Setting)
		for _, m := range marks {
			if way == Rising && a < m && b >= m || way == Falling && a > m && b <= m {
				set.Marks = append(set.Marks, pairing.Mark{T: set.Pairs[i].T + 0.2, Kind: pairing.Button, As: "dial", Declared: fmt.Sprintf("%g %s", m, s.unit)})
			}
		}
	}
}

// quiet makes crossings single: the transducer's own noise would press twice.
func quiet(seed uint64) *bench {
	b := sparse(seed)
	b.noiseSI = 0.001 * psi
	return b
}

func withDial(t *testing.T, s shop) *mill.Profile {
	t.Helper()
	p := profile(t)
	for i := range p.Tensioners {
		if p.Tensioners[i].Name == "T-1" {
			unit := s.unit
			if unit == "div" {
				unit = mill.Divisions
			}
			p.Tensioners[i].Dial = &mill.DialFace{Unit: unit, Graduation: s.graduation}
		}
	}
	return p
}

func TestTheCardReadsInTheDialsOwnUnits(t *testing.T) {
	for name, s := range map[string]shop{
		"psi, 2 % high":         {"psi", 20, 1.02 / psi, 4},
		"bar":                   {"bar", 1, 1e-5, -0.2},
		"kgf/cm2":               {"kgf/cm2", 0.5, 1 / 98066.5, 0},
		"bare, 100 to 1000 psi": {"div", 1, 0.1 / psi, 0.3},
	} {
		t.Run(name, func(t *testing.T) {
			b := quiet(31)
			set := b.measure(cycles(smooth, 3, 20, 860))
			mark := func(psiValue float64) float64 { return s.graduation * math.Round(s.shows(psiValue*psi)/s.graduation) }
			marks := []float64{mark(300), mark(500), mark(700)}
			s.press(set, marks, Rising)
			r := analyzedWith(t, withDial(t, s), set)
			want := s.shows(b.settingAt(Rising, 9500*psi))
			got := r.Dial.AtRising
			lo, hi := got.Reading.Interval95()
			if !got.Reading.Known() || want < lo || want > hi {
				t.Errorf("dial shows %v (%v to %v), truth %v: %+v", got.Reading.Value, lo, hi, want, r.Dial.Rising)
			}
			if left := math.Mod(got.Reading.Value+1e-9, s.graduation); left > 1e-6 {
				t.Errorf("%v is on no mark of %v", got.Reading.Value, s.graduation)
			}
			if math.Abs(got.Exact-got.Reading.Value) > s.graduation/2+1e-9 {
				t.Errorf("rounded from %v to %v", got.Exact, got.Reading.Value)
			}
			if r.Dial.Unit != map[bool]string{true: mill.Divisions, false: s.unit}[s.unit == "div"] {
				t.Errorf("unit %q", r.Dial.Unit)
			}
			if r.Dial.AtFalling.Reading.Known() {
				t.Error("a falling setting on a dial that was compared rising only")
			}
			if off := warned(r, "dial-off"); off != (name == "psi, 2 % high") {
				t.Errorf("dial-off %v", off)
			}
		})
	}
}

// The rounding is in the interval: a coarser dial is never better.
func TestAGraduationIsInTheInterval(t *testing.T) {
	b := quiet(32)
	set := b.measure(cycles(smooth, 3, 20, 860))
	fine := shop{"psi", 1, 1 / psi, 0}
	fine.press(set, []float64{300, 500, 700}, Rising)
	coarse := fine
	coarse.graduation = 100
	width := func(s shop) float64 {
		lo, hi := analyzedWith(t, withDial(t, s), set).Dial.AtRising.Reading.Interval95()
		return hi - lo
	}
	if f, c := width(fine), width(coarse); c < f || c < 0.8*100 {
		t.Errorf("%v psi on marks of 1 psi, %v on marks of 100 psi", f, c)
	}
}

func TestWithoutThreeMarksTheCardIsForTheTransducerOnly(t *testing.T) {
	b := quiet(33)
	s := shop{"psi", 20, 1 / psi, 0}
	for name, marks := range map[string][]float64{"none": nil, "two": {400, 700}, "three far below": {100, 140, 180}} {
		set := b.measure(cycles(smooth, 3, 20, 860))
		s.press(set, marks, Rising)
		r := analyzedWith(t, withDial(t, s), set)
		if r.Dial.AtRising.Reading.Known() || r.Dial.AtRising.Reading.Why == "" || !math.IsNaN(r.Dial.AtRising.Exact) {
			t.Errorf("%s: %+v", name, r.Dial.AtRising)
		}
	}
	set := b.measure(cycles(smooth, 3, 20, 860))
	shop{"bar", 1, 1e-5, 0}.press(set, []float64{20, 35, 50}, Rising)
	if r := analyzedWith(t, withDial(t, s), set); !warned(r, "dial-unread") || r.Dial.AtRising.Reading.Known() {
		t.Errorf("bar read on a dial in psi: %v", r.Warnings)
	}
}
