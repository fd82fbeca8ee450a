package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

func TestRepeatHoldsTheTruthAndTheNextRamp(t *testing.T) {
	// Nominal 95 % at every number of ramps, with scatter between them and without.
	n := trials(2000)
	for _, ramps := range []int{2, 3, 4} {
		for _, between := range []float64{0, 5} {
			r := rand.New(rand.NewPCG(51, uint64(ramps)))
			mean, next := 0, 0
			for range n {
				values, vars := make([]float64, ramps), make([]float64, ramps)
				for i := range values {
					values[i], vars[i] = between*r.NormFloat64()+r.NormFloat64(), 1
				}
				p := Repeat(values, vars, 300)
				if lo, hi := p.Mean.RandomInterval95(); lo <= 0 && 0 <= hi {
					mean++
				}
				again := between*r.NormFloat64() + r.NormFloat64()
				if lo, hi := p.Next.RandomInterval95(); lo <= again && again <= hi {
					next++
				}
			}
			for name, hits := range map[string]int{"mean": mean, "next": next} {
				if share := float64(hits) / float64(n); math.Abs(share-0.95) > chance(0.95, n) {
					t.Errorf("%d ramps, between %v: %s in %.3f", ramps, between, name, share)
				}
			}
		}
	}
}

func TestRepeatOfOneRampSaysNothingOfTheNext(t *testing.T) {
	p := Repeat([]float64{math.NaN(), 7}, []float64{1, 0.25}, 20)
	if p.Next.Known() || p.Next.Why == "" || p.Mean.Value != 7 || p.Mean.Random != 0.5 || p.Mean.DoF != 20 {
		t.Errorf("%+v", p)
	}
	if p := Repeat(nil, nil, 0); p.Mean.Known() || p.Next.Known() {
		t.Errorf("%+v from nothing", p)
	}
	p = Repeat([]float64{1, 3}, []float64{0.5, 0.5}, 20)
	if p.Mean.DoF != 1 || p.Within != 0.5 || math.Abs(p.Between-1.5) > 1e-12 {
		t.Errorf("%+v", p)
	}
	lo, hi := p.Mean.RandomInterval95()
	near(t, "two ramps", (hi-lo)/2, 12.7062047361747, 1e-9) // t at one degree of freedom times 1
}

func TestPooledLineIsTheMeanOfItsRamps(t *testing.T) {
	r := rand.New(rand.NewPCG(52, 52))
	var ramps []Line
	for range 4 {
		ramps = append(ramps, Line{A: 3 + r.NormFloat64(), B: 2 + 0.1*r.NormFloat64(), N: 100, ResidualSD: 0.5})
	}
	l, err := PoolLines(ramps)
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []float64{0, 10, -25} {
		var values []float64
		for _, s := range ramps {
			values = append(values, s.A+s.B*x)
		}
		mean, sd := Mean(values)
		y, std := l.At(x)
		near(t, "mean", y, mean, 1e-12)
		near(t, "std", std, sd/2, 1e-9)
	}
	if l.DoF != 3 || l.N != 400 || l.ResidualSD != 0.5 {
		t.Errorf("%+v", l)
	}
	if _, _, ok := l.Fieller(20, 0, Student95(l.DoF)); !ok {
		t.Error("no interval for the inverse")
	}
	if _, err := PoolLines(ramps[:1]); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	if _, err := PoolLines([]Line{{A: math.NaN()}, {}}); !errors.Is(err, ErrBadValue) {
		t.Error(err)
	}
}
