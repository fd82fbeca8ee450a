package simrig

import (
	"errors"
	"math"
	"slices"
	"testing"
)

// planted is t1 with faults.
func planted(t testing.TB, edit func(*Config), faults ...Fault) Config {
	t.Helper()
	c := t1(t)
	c.SlackM, c.SlackTimeS = 1e-3, 2
	if edit != nil {
		edit(&c)
	}
	for _, f := range faults {
		if err := Plant(&c, f); err != nil {
			t.Fatal(err)
		}
	}
	return c
}

// widthPsi is the width of the loop at a band stress.
func widthPsi(t testing.TB, c Config, stressPa float64) float64 {
	t.Helper()
	r, trace := mustTrace(t, c)
	pull := r.Truth().PullN(stressPa)
	up, down := crossings(trace, pull, true), crossings(trace, pull, false)
	if len(up) == 0 || len(down) == 0 {
		t.Fatalf("%.0f MPa never crossed", stressPa/1e6)
	}
	return (up[0] - down[0]) / psiPa
}

// samplesOf is what a configuration measures.
func samplesOf(t testing.TB, c Config) []Samples {
	t.Helper()
	s, err := mustNew(t, c).Samples()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func sameSamples(a, b []Samples) bool {
	return slices.EqualFunc(a, b, func(a, b Samples) bool { return slices.Equal(a.Samples, b.Samples) })
}

// Every cause can be planted at both ends of its sizes and in the company of
// another, on each kind of tensioner that can have it, gives a rig that runs,
// and changes what it measures.
func TestEveryFaultChangesWhatIsMeasured(t *testing.T) {
	bases := []Config{planted(t, func(c *Config) { c.Drive.Shape = Strokes; c.Drive.HoldTopS = 20 }), t2(t), asTurns(t), asSpring(t)}
	plain := make([][]Samples, len(bases))
	for i := range bases {
		bases[i].MoreMu = 0.01
		plain[i] = samplesOf(t, bases[i])
	}
	for _, row := range Faults() {
		taken := 0
		for i, base := range bases {
			c := base
			err := Plant(&c, Fault{Kind: row.Kind, Size: row.To})
			if errors.Is(err, ErrConfig) {
				continue
			}
			if err != nil {
				t.Fatalf("%s on a tensioner set by %s: %v", row.Kind, base.Profile.Tensioners[min(i, 1)].SetBy, err)
			}
			taken++
			quiet := i > 0 && (row.Kind == DryScrew || row.Kind == DryCollar || row.Kind == ScrewBreakaway) // felt in the torque alone
			if (taken == 1 || !testing.Short()) && !(quiet && i != 1) && sameSamples(samplesOf(t, c), plain[i]) {
				t.Errorf("%s of %g %s changes nothing on tensioner %d", row.Kind, row.To, row.Unit, i)
			}
			c = base
			for _, f := range []Fault{{Kind: row.Kind, Size: row.From}, {Kind: ConstantFriction, Size: 50}} {
				if err := Plant(&c, f); err != nil {
					t.Fatalf("%s, then %s: %v", row.Kind, f.Kind, err)
				}
			}
		}
		if taken == 0 {
			t.Errorf("no tensioner can have %s", row.Kind)
		}
	}
}

func TestFaultsAreRefusedWhereTheyCannotBe(t *testing.T) {
	c := t1(t)
	if err := Plant(&c, Fault{Kind: "gremlins", Size: 1}); !errors.Is(err, ErrConfig) {
		t.Errorf("unknown: %v", err)
	}
	if err := Plant(&Config{}, Fault{Kind: MountSlip, Size: 1}); !errors.Is(err, ErrConfig) {
		t.Errorf("no profile: %v", err)
	}
}

// More friction opens the loop by what the force balance says: with the load,
// by the same everywhere, or both.
func TestFrictionFaultsOpenTheLoopInTheirOwnWay(t *testing.T) {
	const low, high = 20e6, 65.5e6
	plain := planted(t, nil)
	truth := mustNew(t, plain).Truth()
	for kind, want := range map[FaultKind]func(stress float64) float64{
		ProportionalFriction: func(s float64) float64 { return 2 * 0.03 * (truth.PullN(s) + truth.WeightN) / truth.AreaM2 / psiPa },
		ConstantFriction:     func(float64) float64 { return 2 * 500 / truth.AreaM2 / psiPa },
	} {
		size := map[FaultKind]float64{ProportionalFriction: 0.03, ConstantFriction: 500}[kind]
		c := planted(t, nil, Fault{Kind: kind, Size: size})
		for _, s := range []float64{low, high} {
			near(t, string(kind)+": width added, psi", widthPsi(t, c, s)-widthPsi(t, plain, s), want(s), 0.3)
		}
	}
	c := planted(t, nil, Fault{Kind: SealDrag, Size: 0.06})
	lowAdded, highAdded := widthPsi(t, c, low)-widthPsi(t, plain, low), widthPsi(t, c, high)-widthPsi(t, plain, high)
	// At 65.5 MPa 6 % of 724 psi each way, half of it constant.
	near(t, "seals: width added at the working setting, psi", highAdded, 0.12*724, 6)
	if lowAdded < 45 || lowAdded > 0.85*highAdded {
		t.Errorf("seals: %.1f psi added low down, %.1f at the working setting", lowAdded, highAdded)
	}
}

// Seals give before they slide: after the reversal at the top the wheel comes
// down by far more before half of the friction has turned round.
func TestSealsRoundTheReversal(t *testing.T) {
	knee := func(c Config) float64 {
		r, trace := mustTrace(t, c)
		top := 0
		for i, m := range trace {
			if m.PressurePa > trace[top].PressurePa {
				top = i
			}
		}
		tr := r.Truth()
		half := trace[top].PressurePa - (tr.RisingPa(tr.stressPa(trace[top].PullN))-tr.FallingPa(tr.stressPa(trace[top].PullN)))*0.9
		for _, m := range trace[top:] {
			if m.PressurePa < half {
				return trace[top].TravelM - m.TravelM
			}
		}
		return 0
	}
	plain, seals := knee(planted(t, nil)), knee(planted(t, nil, Fault{Kind: SealDrag, Size: 0.08}))
	if plain > 0.02e-3 || seals < 0.05e-3 || seals > 0.6e-3 {
		t.Errorf("nine tenths of the loop crossed in %.3f mm healthy, %.3f mm with seals", plain*1e3, seals*1e3)
	}
}

// A contact that has rested breaks loose higher, the more the longer, and
// forgets it as it slides (Dieterich's ageing).
func TestRestRaisesTheBreakaway(t *testing.T) {
	b := mustContact(t, Law{RestRatio: 1.3, RestS: 60, RenewM: 2e-4, PreslidingM: 1e-6}, 1000, 0)
	b.move(0, 60)
	near(t, "after 60 s", b.levelN(0), 1150, 0.5)
	b.move(0, 540)
	near(t, "after 600 s", b.levelN(0), 1000*(1+0.3*600/660), 0.5)
	for range 50 {
		b.move(1e-4, 1)
	}
	// Steady sliding at 0.1 mm/s renews the contact every 2 s.
	near(t, "sliding", b.levelN(0), 1000*(1+0.3*2/62), 0.5)
}

// slips counts the jumps of a rise: a fifth of a second in which the wheel goes
// more than a hundredth of its way and the pressure falls.
func slips(rise []Moment) (n int, largest float64) {
	way := rise[len(rise)-1].TravelM
	for i := 4; i < len(rise); i++ {
		if dx := rise[i].TravelM - rise[i-4].TravelM; rise[i].TravelM > 0.1*way && dx > 0.01*way && rise[i].PressurePa < rise[i-4].PressurePa {
			n++
			for ; i < len(rise) && rise[i].TravelM > rise[i-1].TravelM+1e-7; i++ {
				dx += rise[i].TravelM - rise[i-1].TravelM
			}
			largest = max(largest, dx/way)
			i += 4
		}
	}
	return n, largest
}

func TestStickSlipJumpsAndJumpsLessWhenFaster(t *testing.T) {
	jumps := func(rate float64, faults ...Fault) (int, float64) {
		c := planted(t, func(c *Config) { c.Drive.RatePaS = rate * psiPa }, faults...)
		_, trace := mustTrace(t, c)
		return slips(riseOf(trace))
	}
	healthy, _ := jumps(8)
	n, size := jumps(8, Fault{Kind: StickSlip, Size: 0.03})
	_, quick := jumps(24, Fault{Kind: StickSlip, Size: 0.03})
	if healthy != 0 || n < 20 || size < 0.012 || size > 0.06 {
		t.Errorf("%d jumps healthy; %d with stick-slip, the largest %.3f of the way", healthy, n, size)
	}
	if quick >= size {
		t.Errorf("jumps of %.4f at 8 psi/s, %.4f at 24", size, quick)
	}
}

func TestEndStopHoldsTheWheelWhilePressureRises(t *testing.T) {
	c := planted(t, nil, Fault{Kind: EndStop, Size: 0.8})
	r, trace := mustTrace(t, c)
	rise := riseOf(trace)
	end := r.conf.start.EndM
	var before, after float64
	for i := 1; i < len(rise); i++ {
		slope := (rise[i].PullN - rise[i-1].PullN) / (rise[i].PressurePa - rise[i-1].PressurePa)
		if math.Abs(rise[i].TravelM-0.7*end) < 0.01*end {
			before = slope
		}
		if rise[i].TravelM > 1.0005*end {
			after = slope
		}
	}
	if after == 0 || after > 0.05*before {
		t.Errorf("slope %.3g N/Pa before the stop, %.3g at it", before, after)
	}
}

func TestToeIsSoftAtTheStartAndGoneFurtherUp(t *testing.T) {
	_, trace := mustTrace(t, planted(t, nil, Fault{Kind: SlackToe, Size: 8e6}))
	slope := func(lowPsi, highPsi float64) float64 {
		var a, b Moment
		for _, m := range riseOf(trace) {
			if m.PressurePa < lowPsi*psiPa {
				a = m
			}
			if m.PressurePa < highPsi*psiPa {
				b = m
			}
		}
		return (b.ExtensionM - a.ExtensionM) / (b.PressurePa - a.PressurePa)
	}
	if toe, straight := slope(120, 150), slope(600, 800); toe > 0.65*straight {
		t.Errorf("slope %.3g in the toe, %.3g above it", toe, straight)
	}
}

// Air takes many strokes at low pressure and few above, and leaves the force
// balance as it is.
func TestAirTakesStrokesAndLeavesTheBranch(t *testing.T) {
	strokes := func(c Config) (low, high float64) {
		c.Drive.Shape = Strokes
		_, trace := mustTrace(t, c)
		marks := []float64{45, 100, 600, 655} // psi
		var s [4]float64
		for i, mark := range marks {
			for _, m := range trace {
				if m.PressurePa > mark*psiPa {
					s[i] = m.T
					break
				}
			}
		}
		return s[1] - s[0], s[3] - s[2]
	}
	plainLow, plainHigh := strokes(planted(t, nil))
	low, high := strokes(planted(t, nil, Fault{Kind: AirInOil, Size: 3e-4}))
	if low-plainLow < 4 || high-plainHigh > 0.3*(low-plainLow) {
		t.Errorf("55 psi took %.1f s low down and %.1f s high up, with air %.1f and %.1f", plainLow, plainHigh, low, high)
	}
	plain, air := widthPsi(t, planted(t, nil), 40e6), widthPsi(t, planted(t, nil, Fault{Kind: AirInOil, Size: 3e-4}), 40e6)
	near(t, "width with air, psi", air, plain, 0.01*plain)
}

// Friction holds the band while the pressure leaks away, until the loss passes
// the loop's width; then both fall together.
func TestLeakShowsOnTheBandOnlyBeyondTheLoop(t *testing.T) {
	c := planted(t, func(c *Config) { c.Drive.HoldTopS = 900 }, Fault{Kind: LeakDown, Size: 3e-4})
	r, trace := mustTrace(t, c)
	top := len(riseOf(trace)) - 1
	tr := r.Truth()
	stress := tr.stressPa(trace[top].PullN)
	width := tr.RisingPa(stress) - tr.FallingPa(stress)
	var lossHeld, pullEnd float64
	for _, m := range trace[top:] {
		if m.T-trace[top].T > 890 {
			break
		}
		if m.PullN > 0.995*trace[top].PullN {
			lossHeld = trace[top].PressurePa - m.PressurePa
		}
		pullEnd = m.PullN
	}
	near(t, "pressure lost before the band follows, of the loop's width", lossHeld/width, 1, 0.12)
	if pullEnd > 0.96*trace[top].PullN {
		t.Errorf("after 890 s the band still pulls %.3f of the top", pullEnd/trace[top].PullN)
	}
}

func TestTransducerBehindTheCheckValve(t *testing.T) {
	t.Run("slow leak: reading falls, band holds", func(t *testing.T) {
		c := planted(t, func(c *Config) { c.Drive.HoldTopS = 120 }, Fault{Kind: GaugeLeak, Size: 5e-4})
		_, trace := mustTrace(t, c)
		top := len(riseOf(trace)) - 1
		after := trace[top+20*110]
		near(t, "reading left", after.PressurePa/trace[top].PressurePa, math.Exp(-5e-4*110), 0.002)
		near(t, "pull left", after.PullN/trace[top].PullN, 1, 1e-4)
	})
	t.Run("no check: reading collapses between strokes", func(t *testing.T) {
		c := planted(t, func(c *Config) { c.Drive.Shape = Strokes }, Fault{Kind: PumpSideGauge, Size: 1})
		_, trace := mustTrace(t, c)
		collapses, worst := 0, 0.0
		rise := riseOf(trace)
		for i := 1; i < len(rise); i++ {
			if rise[i].PullN < 1000 || rise[i].PressurePa > 0.4*rise[i-1].PressurePa && rise[i].PressurePa > 0.9*rise[i-1].PressurePa {
				continue
			}
			worst = max(worst, 1-rise[i].PullN/rise[i-1].PullN)
		}
		for i := 20; i+20 < len(rise); i += 20 {
			lowest, highest := math.Inf(1), 0.0
			for _, m := range rise[i-20 : i+20] {
				lowest, highest = min(lowest, m.PressurePa), max(highest, m.PressurePa)
			}
			if lowest < 0.5*highest {
				collapses++
			}
		}
		if collapses < 50 || worst > 1e-3 {
			t.Errorf("%d collapses, the pull fell by %.2g", collapses, worst)
		}
	})
}
