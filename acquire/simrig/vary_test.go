package simrig

import (
	"math"
	"testing"
)

// Each ramp has its own friction, known to the truth, and so have those that
// would come next.
func TestRampsVaryAsToldByTheTruth(t *testing.T) {
	c := quick(t)
	c.Vary = Vary{Mu: 0.003, F0: 0.05}
	c.Drive.Ramps = 4
	r, trace := mustTrace(t, c)
	truth := r.Truth()
	const stress = 65.5e6
	up, down := crossings(trace, truth.PullN(stress), true), crossings(trace, truth.PullN(stress), false)
	if len(up) != 4 || len(down) != 4 || len(truth.Cycles) < 6 {
		t.Fatalf("%d and %d crossings, %d cycles known", len(up), len(down), len(truth.Cycles))
	}
	for i := range up {
		near(t, "rising psi", up[i]/psiPa, truth.InCycle(i).RisingPa(stress)/psiPa, 0.15)
		near(t, "falling psi", down[i]/psiPa, truth.InCycle(i).FallingPa(stress)/psiPa, 0.15)
	}
	if math.Abs(up[0]-up[1]) < 0.05*psiPa {
		t.Error("two ramps alike")
	}
}

func TestVariationHasTheSpreadAskedFor(t *testing.T) {
	c := quick(t)
	c.Vary.Mu = 0.003
	var sum, squares, n float64
	for seed := range uint64(150) {
		c.Seed = seed
		truth := mustNew(t, c).Truth()
		for i := range truth.Cycles {
			off := truth.InCycle(i).RisingPa(65.5e6)/truth.RisingPa(65.5e6) - 1
			sum, squares, n = sum+off, squares+off*off, n+1
		}
	}
	// mu moves S(1+mu)+F0 by S: 0.3 % of S is 0.278 % of the setting of T-1.
	near(t, "spread of the setting", math.Sqrt(squares/n), 0.00278, 0.0002)
	near(t, "mean", sum/n, 0, 0.0003)
}

// Heat on a band shows as stretch that no pull makes where the band is slack. On
// a band that is held between its wheels it shows nothing and lets the pull go:
// by the lengthening over what gives way.
func TestWarmBandStretchesOrLetsGo(t *testing.T) {
	_, trace := mustTrace(t, planted(t, nil, Fault{Kind: BandWarming, Size: 1e-3}))
	last := trace[len(trace)-1]
	near(t, "stretch of the slack band, um", last.ExtensionM*1e6, 0.508*11.5e-6*1e-3*last.T*1e6, 0.03)
	c := asTurns(t)
	c.Drive.HoldTopS, c.Heat.BandKS = 300, 1e-2
	r, trace := mustTrace(t, c)
	top := 0
	for i := range trace {
		if trace[i].PullN > trace[top].PullN {
			top = i
		}
	}
	const halfLoopM = 7.3 * 12 * inchM
	truth := r.Truth().Screw
	want := halfLoopM * 11.5e-6 * 1e-2 * 200 / (1/truth.SpringNM + truth.GiveMN)
	near(t, "pull let go, N", trace[top].PullN-trace[top+20*200].PullN, want, 0.02*want)
}

// An aluminium bar that warms with the band by 5 K shows 57 microstrain too
// little (derived from the two expansions).
func TestAluminiumBarThatWarms(t *testing.T) {
	h := newHeat(Heat{RigKS: 5.0 / 600, RigPerK: 23e-6}, 10)
	near(t, "microstrain", h.mountM(1, 600)*1e6-h.mountM(1, 0)*1e6, -57.5-11.5*morningK(600), 0.3)
}

func TestDraggingWheelPullsOnSpanMore(t *testing.T) {
	at := func(c Config) (one, two float64) {
		c.Second = SecondSpan
		w := newWorld(mustNew(t, c).conf)
		w.start(0)
		for w.now().pullN < 25000 {
			w.advance(w.now().t + 0.05)
		}
		return w.now().extensionM[0], w.now().extensionM[1]
	}
	one, two := at(planted(t, nil, Fault{Kind: WheelDrag, Size: 0.1}))
	near(t, "difference of the spans", (one-two)/(one+two)*2, 0.1, 0.002)
	slack := planted(t, nil)
	slack.Chain = Chain{Lopsided: 0.1, BrakeN: 500}
	one, two = at(slack)
	near(t, "once the brake slips", (one-two)/(one+two), 500.0/25000, 0.001)
}

func TestCurlOfTwoFacesCancels(t *testing.T) {
	c := planted(t, nil, Fault{Kind: FaceCurl, Size: 1e-4})
	c.Second = SecondFace
	w, plain := newWorld(mustNew(t, c).conf), newWorld(mustNew(t, planted(t, nil)).conf)
	w.start(0)
	plain.start(0)
	w.advance(90)
	plain.advance(90)
	a := w.now().extensionM
	near(t, "apart, um", (a[0]-a[1])*1e6, 200, 1)
	near(t, "mean, um", (a[0]+a[1])/2*1e6, plain.now().extensionM[0]*1e6, 1e-6)
}
