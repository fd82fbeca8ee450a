package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// slipping is a rising ramp read some times a second, whose mount may slip. All
// in psi of setting: 0.001 mm is 3.7 of them, 0.0005 in 47.
type slipping struct {
	count, noise, rho float64
	rate, perS        float64 // psi/s, readings/s
	toe, bend         float64 // psi over which the band seats; sag at the middle
	strokes           bool    // a hand pump: 0.6 s up, 1.4 s still
	slip              float64
}

// draw is the readings and the index of the slip.
func (c slipping) draw(r *rand.Rand) (Readings, int) {
	var out Readings
	var y []float64
	seconds := rampSpan / c.rate
	n := int(seconds * c.perS)
	at := n/10 + r.IntN(n*8/10)
	zero, d := 100*c.count*r.Float64(), r.NormFloat64()
	for i := range n {
		t := float64(i) / c.perS
		x := c.rate * t
		if c.strokes {
			whole, part := math.Floor(t/2), math.Mod(t, 2)
			x = c.rate * 2 * (whole + math.Min(1, part/0.6))
		}
		d = c.rho*d + math.Sqrt(1-c.rho*c.rho)*r.NormFloat64()
		v := zero + x + c.bend*4*x/rampSpan*(x/rampSpan-1) + c.noise*d
		if c.toe > 0 {
			v -= c.toe * (1 - math.Exp(-x/c.toe))
		}
		if i >= at {
			v += c.slip
		}
		out.X, y = append(out.X, x), append(y, math.Round(v/c.count)*c.count)
	}
	out.Lo, out.Hi = Rounded(y, c.count, 0)
	out.YStd = 0.8 * c.noise
	if c.rho > 0 {
		out.Memory = int(math.Ceil(math.Log(0.05) / math.Log(c.rho)))
	}
	return out, at
}

func slippings() map[string]slipping {
	return map[string]slipping{
		"0.001 mm":                {count: 3.7, noise: 2.4, rate: 8, perS: 10},
		"0.001 mm, slow noise":    {count: 3.7, noise: 2.4, rho: 0.8, rate: 8, perS: 10},
		"0.001 mm, toe and bend":  {count: 3.7, noise: 1, rate: 8, perS: 10, toe: 60, bend: 15},
		"0.001 mm, strokes":       {count: 3.7, noise: 1, rate: 8, perS: 10, strokes: true},
		"0.0001 mm":               {count: 0.37, noise: 1, rate: 4, perS: 5},
		"0.0005 in":               {count: 47, noise: 2.4, rate: 8, perS: 10},
		"0.0005 in, 3 readings/s": {count: 47, noise: 0.3, rate: 8, perS: 3},
		"0.0005 in, strokes":      {count: 47, noise: 1, rate: 8, perS: 10, strokes: true},
		"0.01 mm, toe":            {count: 37, noise: 1, rate: 4, perS: 5, toe: 60},
	}
}

func TestStepsAreFoundWhereTheyAre(t *testing.T) {
	for name, c := range slippings() {
		c.slip = 37 // 0.01 mm
		if c.count > 4 {
			c.slip = 3 * c.count
		}
		n := trials(16)
		found := 0
		var off float64
		for k := range n {
			r := rand.New(rand.NewPCG(uint64(k), 21))
			d, at := c.draw(r)
			if k%2 == 1 { // inward
				for i := at; i < len(d.X); i++ {
					d.Lo[i] -= 2 * c.slip
					d.Hi[i] -= 2 * c.slip
				}
			}
			steps, err := FindSteps(d, StepSearch{})
			if err != nil {
				t.Fatal(err)
			}
			if len(steps) == 1 && math.Abs(float64(steps[0].Index-at)) <= c.perS {
				found++
				off += (math.Abs(steps[0].Size.Value) - c.slip) / c.slip
				if s := steps[0].Size; math.Abs(math.Abs(s.Value)-c.slip) > 5*s.Random {
					t.Errorf("%s: size %v +/- %v, truth %v", name, s.Value, s.Random, c.slip)
				}
			}
		}
		t.Logf("%s: %d of %d, size off by %+.3f of it", name, found, n, off/float64(found))
		if float64(found) < 0.99*float64(n)-3*math.Sqrt(0.01*float64(n))-0.5 {
			t.Errorf("%s: found within 1 s in %d of %d", name, found, n)
		}
	}
}

func TestStepsAreNotInvented(t *testing.T) {
	for name, c := range slippings() {
		for k := range trials(24) {
			r := rand.New(rand.NewPCG(uint64(k), 22))
			d, _ := c.draw(r)
			steps, err := FindSteps(d, StepSearch{})
			if err != nil {
				t.Fatal(err)
			}
			for _, s := range steps {
				t.Errorf("%s, seed %d: a step of %v at %d of %d", name, k, s.Size.Value, s.Index, len(d.X))
			}
		}
	}
}

func TestStepsTwoInOneSeries(t *testing.T) {
	c := slipping{count: 3.7, noise: 1, rate: 8, perS: 10}
	d, _ := c.draw(rand.New(rand.NewPCG(1, 23)))
	for i := range d.X {
		if i >= 200 {
			d.Lo[i], d.Hi[i] = d.Lo[i]+37, d.Hi[i]+37
		}
		if i >= 600 {
			d.Lo[i], d.Hi[i] = d.Lo[i]-37, d.Hi[i]-37
		}
	}
	steps, err := FindSteps(d, StepSearch{})
	if err != nil || len(steps) != 2 {
		t.Fatalf("%v, %v", steps, err)
	}
	for i, at := range []int{200, 600} {
		if s := steps[i]; math.Abs(float64(s.Index-at)) > 2 || (s.Size.Value > 0) != (at == 200) {
			t.Errorf("step %d: %+v", i, s)
		}
	}
}

func TestStepsRefuseBadReadings(t *testing.T) {
	if _, err := FindSteps(Readings{}, StepSearch{}); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	x := []float64{1, 2, 3, 4, 5, 6, 7, 8}
	if s, err := FindSteps(Readings{X: x, Lo: x, Hi: x}, StepSearch{}); err != nil || len(s) != 0 {
		t.Errorf("a line: %v, %v", s, err)
	}
}

func TestStepsAreNotSeenInAReversal(t *testing.T) {
	// A whole loop: the setting turns, and y waits for 100 psi before it follows.
	for k := range trials(16) {
		r := rand.New(rand.NewPCG(uint64(k), 24))
		var d Readings
		var y []float64
		load := -50.0
		for i := range 1850 {
			x := 0.8 * float64(min(i, 1850-i))
			load = math.Min(math.Max(load, x-50), x+50)
			d.X, y = append(d.X, x+r.NormFloat64()), append(y, math.Round((load+0.5*r.NormFloat64())/3.7)*3.7)
		}
		d.Lo, d.Hi = Rounded(y, 3.7, 0)
		if s, err := FindSteps(d, StepSearch{}); err != nil || len(s) != 0 {
			t.Errorf("seed %d: %v, %v", k, s, err)
		}
	}
}
