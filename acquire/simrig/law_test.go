package simrig

import (
	"encoding/json"
	"errors"
	"math"
	"os"
	"testing"
)

// frictionVectors is testdata/friction.json; its SOURCES.md says where from.
type frictionVectors struct {
	Dahl struct {
		Sigma, Fc float64
		Loading   struct{ X, F []float64 } `json:"loading_from_rest"`
		Reversal  struct {
			Back []float64 `json:"distance_back"`
			F    []float64
		} `json:"reversal_from_plus_Fc"`
		Zero float64 `json:"zero_crossing_distance"`
	} `json:"dahl_n1"`
	Stop struct {
		R       float64
		U, Stop []float64
	}
	Stribeck struct {
		Fc, Fs, Vs, Sigma2 float64
		V, F               []float64
	}
	PI struct{ U, R, W, Y []float64 } `json:"prandtl_ishlinskii"`

	Play struct {
		U, Y []float64
		R    float64
	}
	LuGre struct{ Sigma0, Sigma1, Sigma2, Fc, Fs, Vs, V, Z float64 }
	Leak  struct {
		Y0, Tau float64
		Low     float64 `json:"y_inf"`
		T, Y    []float64
	} `json:"exp_leak"`
}

func readVectors(t *testing.T) frictionVectors {
	t.Helper()
	text, err := os.ReadFile("testdata/friction.json")
	if err != nil {
		t.Fatal(err)
	}
	var v frictionVectors
	if err := json.Unmarshal(text, &v); err != nil {
		t.Fatal(err)
	}
	return v
}

func mustContact(t *testing.T, l Law, f0N, mu float64) contact {
	t.Helper()
	b, err := l.newContact(f0N, mu)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// slide moves a contact in a few steps; how many must not matter.
func slide(b *contact, dist float64, steps int) {
	for range steps {
		b.move(dist/float64(steps), 1)
	}
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: got %.12g, want %.12g within %.2g", what, got, want, tolerance)
	}
}

func TestDahlFollowsThePublishedCurve(t *testing.T) {
	v := readVectors(t).Dahl
	length := v.Fc / v.Sigma
	force := func(b *contact) float64 { return b.levelN(0) * b.strain }
	for i, x := range v.Loading.X {
		b := mustContact(t, Law{PreslidingM: length}, v.Fc, 0)
		slide(&b, x, i%3+1)
		near(t, "loading from rest", force(&b), v.Loading.F[i], 1e-9*v.Fc)
	}
	for i, back := range v.Reversal.Back {
		b := mustContact(t, Law{PreslidingM: length}, v.Fc, 0)
		b.strain = 1
		slide(&b, -back, i%3+1)
		near(t, "after a reversal", force(&b), v.Reversal.F[i], 1e-9*v.Fc)
	}
	b := mustContact(t, Law{PreslidingM: length}, v.Fc, 0)
	b.strain = 1
	slide(&b, -v.Zero, 1)
	near(t, "zero crossing", force(&b), 0, 1e-9*v.Fc)
}

func TestElastoplasticIsTheStopOperator(t *testing.T) {
	v := readVectors(t).Stop
	b := mustContact(t, Law{Kind: Elastoplastic, PreslidingM: v.R}, v.R, 0)
	for i := 1; i < len(v.U); i++ {
		slide(&b, v.U[i]-v.U[i-1], i%3+1)
		near(t, "stop", b.levelN(0)*b.strain, v.Stop[i], 1e-9)
	}
}

func TestStribeckLevelFollowsThePublishedCurve(t *testing.T) {
	v := readVectors(t).Stribeck
	for i, speed := range v.V {
		b := mustContact(t, Law{Kind: Stribeck, StaticRatio: v.Fs / v.Fc, StribeckMS: v.Vs, MemoryS: 1e-9}, v.Fc, 0)
		b.strain = 1
		b.move(speed, 1)
		near(t, "level and viscous part", b.levelN(0)+v.Sigma2*speed, v.F[i], 1e-8)
	}
}

func TestLevelIsConstantPlusShareOfTheLoad(t *testing.T) {
	const f0, mu, load = 900.0, 0.05, 20000.0
	for kind, want := range map[LawKind]float64{
		"": 1900, Dahl: 1900, Elastoplastic: 1900, Stribeck: 1.15 * 1900, ConstantOnly: 900, ProportionalOnly: 1000,
	} {
		b := mustContact(t, Law{Kind: kind}, f0, mu)
		near(t, "level of law "+string(kind), b.levelN(load), want, 1e-9)
	}
}

func TestNonsenseLawsAreRefused(t *testing.T) {
	for _, l := range []Law{
		{Kind: "sticky"}, {PreslidingM: -1}, {Exponent: -1},
		{Kind: Stribeck, StaticRatio: 0.5}, {Kind: Stribeck, StribeckMS: -1},
	} {
		if _, err := l.newContact(1, 0); !errors.Is(err, ErrConfig) {
			t.Errorf("%+v: got error %v, want ErrConfig", l, err)
		}
	}
}

// The stops that make Prandtl-Ishlinskii's law give its published output, and a
// closed loop from -3 to 3 the published area 4.0.
func TestStopsMakeThePublishedPrandtlIshlinskiiOutput(t *testing.T) {
	v := readVectors(t).PI
	strain := make([]float64, len(v.R))
	var area, before float64
	for i := 1; i < len(v.U); i++ {
		du, y := v.U[i]-v.U[i-1], 0.0
		for k, r := range v.R {
			if r > 0 {
				strain[k], _ = stop(strain[k], du, r)
			}
			y += v.W[k] * (v.U[i] - r*strain[k])
		}
		near(t, "output", y, v.Y[i], 1e-12)
		if i > 3 { // from the first reversal round to it again
			area -= (y + before) / 2 * du
		}
		before = y
	}
	near(t, "area of the loop", area, 4, 1e-12)
}

// LuGre at steady speed: bristles bent by the published 1.18393972059e-5 m, and
// the published force of the Stribeck curve with its viscous part.
func TestLuGreAtSteadySpeed(t *testing.T) {
	v, stribeck := readVectors(t).LuGre, readVectors(t).Stribeck
	for i, speed := range stribeck.V {
		c := mustContact(t, Law{Kind: LuGre, PreslidingM: v.Fc / v.Sigma0, StaticRatio: v.Fs / v.Fc, StribeckMS: v.Vs,
			MemoryS: 1e-9, BristleNsM: v.Sigma1, ViscousNsM: v.Sigma2}, v.Fc, 0)
		for range 2000 {
			c.move(speed*1e-3, 1e-3)
		}
		force, _ := c.forceN(speed*1e-3, 1e-3, 0, 0)
		near(t, "force", force, stribeck.F[i], 1e-9)
		if speed == v.V {
			near(t, "bend of the bristles", c.strain*v.Fc/v.Sigma0, v.Z, 1e-15)
		}
	}
}

// Bristles that are pushed and let go come back: within the presliding range
// LuGre is a damped spring, so a small push leaves no travel behind it.
func TestLuGreIsElasticBeforeItSlides(t *testing.T) {
	c := mustContact(t, Law{Kind: LuGre, PreslidingM: 1e-5, StaticRatio: 1.5}, 1, 0)
	c.move(1e-7, 1)
	force, _ := c.forceN(0, 1, 0, 0)
	near(t, "force of a bend of a hundredth", force, 0.01, 1e-4)
}

// Prandtl-Ishlinskii's law comes to the same level along a broken line, and a
// reversal asks twice the way of the first rise (Masing's rule).
func TestPrandtlIshlinskiiReversesByMasingsRule(t *testing.T) {
	first := mustContact(t, Law{Kind: PrandtlIshlinskii, PreslidingM: 1e-5}, 1000, 0)
	first.move(1e-5, 1)
	back := mustContact(t, Law{Kind: PrandtlIshlinskii, PreslidingM: 1e-5}, 1000, 0)
	back.move(1e-3, 1)
	near(t, "full", back.strain, 1, 1e-12)
	back.move(-2e-5, 1)
	near(t, "after twice the way back", back.strain, 1-2*first.strain, 1e-12)
}
