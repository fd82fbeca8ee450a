package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

func TestHoldGivesTheCreepVector(t *testing.T) {
	// y = 100 - 1.5 ln(1 + t/10): 3.453877639 a decade. A vector of this project.
	at := []float64{0, 10, 60, 600, 3600}
	y := []float64{100, 98.9602792292, 97.0811347764, 93.8336892037, 91.1666830625}
	h, err := FitHold(at, y)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "per decade", h.PerDecade.Value, -3.453877639, 1e-8)
	near(t, "t0", h.T0, 10, 1e-7)
	if h.Kind != HoldCreep {
		t.Errorf("%q, RSS %v", h.Kind, h.RSS)
	}
}

func TestHoldGivesTheLeakVector(t *testing.T) {
	// y = 40 + 60 exp(-t/300); for equal steps tau = dt / ln((y1-y2)/(y2-y3)). A
	// vector of this project.
	at := []float64{0, 60, 300, 600, 1200}
	y := []float64{100, 89.1238451847, 62.0727664703, 48.1201169942, 41.0989383333}
	h, err := FitHold(at, y)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "tau", h.Tau.Value, 300, 1e-8)
	near(t, "end", h.YEnd, 40, 1e-8)
	near(t, "three equal steps", 300/math.Log((y[0]-y[2])/(y[2]-y[3])), 300, 1e-9)
	if h.Kind != HoldLeak {
		t.Errorf("%q, RSS %v", h.Kind, h.RSS)
	}
}

func TestHoldTellsTheKinds(t *testing.T) {
	for _, c := range []struct {
		name  string
		law   func(t float64) float64
		noise float64
		want  HoldKind
	}{
		{"still", func(float64) float64 { return 700 }, 0.3, HoldStill},
		{"steady leak, 0.9 % a minute", func(t float64) float64 { return 700 - 0.105*t }, 0.3, HoldLeak},
		{"leak to an end", func(t float64) float64 { return 650 + 50*math.Exp(-t/60) }, 0.3, HoldLeak},
		{"tyre creep", func(t float64) float64 { return 700 - 4*math.Log1p(t/3) }, 0.3, HoldCreep},
		{"noise hides it", func(t float64) float64 { return 700 - 0.4*math.Log1p(t/30) }, 0.5, HoldUnsettled},
	} {
		n, right := trials(25), 0
		got := map[HoldKind]int{}
		for k := range n {
			r := rand.New(rand.NewPCG(uint64(k), 41))
			var at, y []float64
			for i := range 180 {
				at, y = append(at, float64(i)), append(y, c.law(float64(i))+c.noise*r.NormFloat64())
			}
			h, err := FitHold(at, y)
			if err != nil {
				t.Fatal(err)
			}
			got[h.Kind]++
			if h.Kind == c.want {
				right++
			}
			if c.want == HoldCreep && math.Abs(h.PerDecade.Value+4*math.Ln10) > 5*h.PerDecade.Random {
				t.Errorf("%s: %v +/- %v a decade", c.name, h.PerDecade.Value, h.PerDecade.Random)
			}
		}
		if c.want != HoldUnsettled && right < n*9/10-1 || got[HoldLeak]*5 > n+10 && c.want != HoldLeak || got[HoldCreep]*5 > n+10 && c.want != HoldCreep {
			t.Errorf("%s: %v", c.name, got)
		}
	}
}

func TestHoldOfNothingMovingAndBadInput(t *testing.T) {
	at := []float64{0, 1, 2, 3, 4, 5}
	h, err := FitHold(at, []float64{5, 5, 5, 5, 5, 5})
	if err != nil || h.Kind == HoldLeak || h.Kind == HoldCreep || h.Tau.Known() {
		t.Errorf("%+v, %v", h, err)
	}
	if _, err := FitHold(at[:4], at[:4]); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	if (Hold{}).Kind != HoldUnsettled {
		t.Error("a hold starts settled")
	}
}
