package analyze

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/gauge"
)

// sparse reads seldom, for a short test.
func sparse(seed uint64) *bench {
	b := newBench(seed)
	b.settingHz, b.extensionHz = 20, 5
	return b
}

// tested puts the rig's transducer on the bench: six points from 0 to 900 psi,
// twice up and down, against a reference of 0.5 psi, and gives the profile with
// its record.
func (b *bench) tested(t *testing.T, verdict string) *mill.Profile {
	t.Helper()
	plan, err := gauge.ParsePlan([]byte("name = \"transducer\"\nkind = \"transducer\"\nsteps = 5\nrange_high = \"900 psi\"\nrepeats = 2\n"))
	if err != nil {
		t.Fatal(err)
	}
	tested, _ := profile(t).FindInstrument(mill.MeasuresSetting, mill.DimPressure, "QF-P-1107")
	test := gauge.Test{Plan: plan, Instruments: gauge.Instruments{Tested: tested, TestedCountSI: b.countSI, ReferenceCountSI: 0.05 * psi}}
	test.Instruments.Reference.Limit.SI = 0.5 * psi
	test.Instruments.Reference.Limit.Entered = "0.5 psi"
	test.Conditions.Day = "2026-08-31"
	rng := rand.New(rand.NewPCG(3, 1))
	referenceOff := 0.5 * psi * (2*rng.Float64() - 1)
	for _, target := range plan.Targets() {
		p := target.Nominal.SI
		test.Points = append(test.Points, gauge.Point{
			Target: target, Reference: gauge.Level{SI: p + referenceOff, N: 100},
			Indicated: gauge.Level{SI: round(p+between(b.settingErrSI, p/(900*psi))+0.1*psi*rng.NormFloat64(), b.countSI), N: 100},
		})
	}
	res, err := gauge.Evaluate(test)
	if err != nil {
		t.Fatal(err)
	}
	record := res.Record()
	if verdict != "" {
		record.Bench.Verdict = verdict
	}
	merged, _, err := mill.MergeInstruments(mill.Example(), mill.EncodeInstruments([]mill.Instrument{record}))
	if err != nil {
		t.Fatal(err)
	}
	p, err := mill.Parse(merged)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func analyzedWith(t *testing.T, p *mill.Profile, set *pairing.Set) *Result {
	t.Helper()
	r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func termOf(t *testing.T, r *Result, name string) Term {
	t.Helper()
	for _, b := range r.AtRising.Budget {
		if b.Name == name {
			return b
		}
	}
	t.Fatalf("no %s in the budget", name)
	return Term{}
}

// A gauge that reads 1 % high gives, once its bench record corrects it, the card
// of a perfect gauge.
func TestABenchRecordGivesTheCardOfAPerfectGauge(t *testing.T) {
	perfect, high := sparse(21), sparse(21)
	high.settingErrSI = [2]float64{0, 9 * psi}
	want := analyzedWith(t, profile(t), perfect.measure(cycles(smooth, 4, 20, 860)))
	set := high.measure(cycles(smooth, 4, 20, 860))
	raw := analyzedWith(t, profile(t), set)
	got := analyzedWith(t, high.tested(t, ""), set)

	for _, d := range []Direction{Rising, Falling} {
		right, off, mended := want.target(d), raw.target(d), got.target(d)
		truth := high.settingAt(d, 9500*psi)
		doubt := termOf(t, got, "setting gauge").StdSI
		if diff := math.Abs(mended.SettingSI.Value - right.SettingSI.Value); diff > 2*doubt {
			t.Errorf("%s: %.2f psi from the perfect gauge's card, doubt of the correction %.2f psi", d, diff/psi, doubt/psi)
		}
		if diff := off.SettingSI.Value - right.SettingSI.Value; diff < 5*psi {
			t.Errorf("%s: uncorrected it is only %.2f psi off", d, diff/psi)
		}
		holds(t, "corrected setting "+string(d), mended.TrueSI, truth)
		lo, hi := mended.TrueSI.Interval95()
		wide, wider := hi-lo, right.TrueSI
		rlo, rhi := wider.Interval95()
		if wide > rhi-rlo {
			t.Errorf("%s: the record makes the interval wider: %.1f against %.1f psi", d, wide/psi, (rhi-rlo)/psi)
		}
	}
}

func (r *Result) target(d Direction) TargetSetting {
	if d == Falling {
		return r.AtFalling
	}
	return r.AtRising
}

// Without a record the budget carries the limit of the class; with one, what the
// bench left in doubt.
func TestTheBudgetCarriesTheLimitOrTheRecord(t *testing.T) {
	b := sparse(22)
	set := b.measure(cycles(smooth, 4, 20, 860))
	raw, got := analyzedWith(t, profile(t), set), analyzedWith(t, b.tested(t, ""), set)
	near(t, "limit / sqrt 3, psi", termOf(t, raw, "setting gauge").StdSI/psi, 3.75/math.Sqrt(3), 0.05)
	term := termOf(t, got, "setting gauge")
	if term.StdSI > 0.8*psi || !strings.Contains(term.From, "bench record of 2026-08-31") {
		t.Errorf("%+v", term)
	}
	if !warned(raw, "instrument-uncorrected") {
		t.Error("an uncorrected instrument is no warning")
	}
	for _, w := range got.Warnings { // the indicator is left
		if w.Code == "instrument-uncorrected" && (strings.Contains(w.Text, "QF-P-1107") || !strings.Contains(w.Text, "QF-X-2290")) {
			t.Error(w.Text)
		}
	}
}

func TestAFailedOrUndecidedInstrumentIsAWarning(t *testing.T) {
	b := sparse(23)
	set := b.measure(cycles(smooth, 2, 20, 860))
	for verdict, code := range map[string]string{"fail": "instrument-failed", "undecided": "instrument-undecided", "inconclusive": "instrument-undecided", "pass": ""} {
		r := analyzedWith(t, b.tested(t, verdict), set)
		if warned(r, "instrument-failed") != (code == "instrument-failed") || warned(r, "instrument-undecided") != (code == "instrument-undecided") {
			t.Errorf("%s: %v", verdict, r.Warnings)
		}
	}
}

func TestReadingsBeyondTheBenchAreAWarning(t *testing.T) {
	b := sparse(24)
	p := b.tested(t, "")
	bench := p.Instruments[len(p.Instruments)-1].Bench
	bench.Points = bench.Points[:3] // up to 360 psi
	if r := analyzedWith(t, p, b.measure(cycles(smooth, 2, 20, 860))); !warned(r, "beyond-bench") {
		t.Errorf("%v", r.Warnings)
	}
	if r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: b.measure(cycles(smooth, 2, 20, 860)), Records: "records.toml"}); err != nil || !warned(r, "instruments-replaced") {
		t.Errorf("an override is not named: %v", err)
	}
}

// What rises is corrected by the rising correction, what falls by the falling.
func TestCorrectionsFollowTheDirection(t *testing.T) {
	s := newSides([]float64{0, 1, 2, 3, 4, 5, 6}, []float64{0, 5, 10, 5, 0, 5, 10})
	for at, want := range map[float64]mill.Approach{0.5: mill.FromBelow, 1.9: mill.FromBelow, 2.5: mill.FromAbove, 3.9: mill.FromAbove, 4.5: mill.FromBelow, 9: mill.FromBelow} {
		if got := s.at(at); got != want {
			t.Errorf("at %v: %v, want %v", at, got, want)
		}
	}
	down := newSides([]float64{0, 1, 2, 3, 4}, []float64{10, 5, 0, 5, 10})
	if down.at(1) != mill.FromAbove || down.at(3) != mill.FromBelow {
		t.Error("a record that begins falling")
	}
}
