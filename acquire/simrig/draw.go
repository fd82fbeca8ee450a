package simrig

import (
	"fmt"
	"math"
	"math/rand/v2"

	"tautramp/acquire/mill"
)

// drawnName and drawnBand are the names in a drawn profile.
const (
	drawnTensioner = "R-1"
	drawnBand      = "RB-1"
)

// Draw makes up a healthy mill with a tensioner set by pressure, its band, its
// measuring rig and its operator, at random within what is met in mills
// (judgement). The same source gives the same mill; the configuration's seed
// comes from it too.
func Draw(rng *rand.Rand) (Config, error) {
	d := drawnOil(rng)
	p, err := mill.Parse([]byte(d.profile()))
	if err != nil {
		return Config{}, fmt.Errorf("%w: drawn profile: %w", ErrConfig, err)
	}
	c := Config{
		Profile: p, Tensioner: drawnTensioner, Band: drawnBand, Seed: rng.Uint64(),
		Drive:  drawDrive(rng, d.workPa),
		Vary:   Vary{Mu: within(rng, 0.0003, 0.001)},
		Oil:    Oil{HosePart: within(rng, 0, 0.1), Give: within(rng, 1, 2)},
		SlackM: within(rng, 1e-3, 4e-3), SlackTimeS: within(rng, 3, 8),
	}
	c.Law.Kind = pick(rng, Dahl, Dahl, Elastoplastic, PrandtlIshlinskii, LuGre)
	c.Law.PreslidingM = within(rng, 2e-6, 8e-6)
	if c.Law.Kind == LuGre {
		c.Law.StaticRatio = within(rng, 1, 1.05)
	}
	c.Pressure.NoiseSI = within(rng, 0.3, 1.2) * psiPa
	c.Indicator.NoiseSI = within(rng, 0.5e-7, 2e-7)
	c.Indicator.Count = pick(rng, Count{"[in_i]", 5, -5}, Count{"[in_i]", 5, -4})
	return c, nil
}

// drawDrive is one of three ways of pumping.
func drawDrive(rng *rand.Rand, workPa float64) Drive {
	d := Drive{
		Shape:    pick(rng, Smooth, Strokes, Stairs),
		RatePaS:  workPa / within(rng, 60, 150),
		HoldTopS: within(rng, 30, 60), HoldLowS: within(rng, 8, 15),
		SagPart: within(rng, 0.001, 0.03), StrokeS: within(rng, 1.2, 3),
		Steps: 6 + rng.IntN(5), StepHoldS: within(rng, 3, 8),
	}
	return d
}

// drawn is a mill in the making. SI.
type drawn struct {
	cylinders      int
	boreM, limitPa float64
	weightN, f0N   float64
	mu             float64
	thickM, netM   float64
	targetPa       float64
	loopM, gaugeM  float64
	workPa         float64 // setting at the target, about
}

func drawnOil(rng *rand.Rand) drawn {
	d := drawn{
		cylinders: 1 + rng.IntN(2),
		thickM:    within(rng, 0.9e-3, 1.9e-3), netM: within(rng, 40e-3, 180e-3),
		targetPa: within(rng, 50e6, 100e6), loopM: within(rng, 5, 13), gaugeM: within(rng, 0.3, 0.55),
		mu: within(rng, 0.004, 0.012),
	}
	pull := 2 * d.targetPa * d.thickM * d.netM
	d.weightN = within(rng, 0.05, 0.2) * pull
	d.f0N = within(rng, 0.003, 0.012) * pull
	d.workPa = within(rng, 350, 1000) * psiPa
	area := (pull + d.weightN) / d.workPa
	d.boreM = math.Round(math.Sqrt(4*area/math.Pi/float64(d.cylinders))*1e3) / 1e3
	d.workPa = (pull + d.weightN) / (float64(d.cylinders) * math.Pi / 4 * d.boreM * d.boreM)
	d.limitPa = 1.4 * d.workPa
	return d
}

// profile is the mill as its owner would write it down.
func (d drawn) profile() string {
	return fmt.Sprintf(`[mill]
name = "drawn mill"
[[tensioner]]
name = %q
set_by = "pressure"
setting_limit = "%.0f Pa"
cylinders = %d
bore = "%.6g mm"
lifted_weight = "%.6g N"
hold = "maintained"
[tensioner.rehearsal]
friction_constant = "%.6g N"
friction_proportional = %.6g
weight = "%.6g N"
band_loop = "%.6g m"
[[band]]
name = %q
thickness = "%.6g mm"
net_width = "%.6g mm"
target = "%.6g MPa"
modulus = "200 GPa"
[rig]
gauge_length = "%.6g mm"
material = "steel"
[[instrument]]
name = "transducer"
serial = "R-P"
measures = "setting"
limit = "3.75 psi"
[[instrument]]
name = "indicator"
serial = "R-X"
measures = "extension"
limit = "0.003 mm"
`, drawnTensioner, d.limitPa, d.cylinders, d.boreM*1e3, d.weightN, d.f0N, d.mu, d.weightN, d.loopM,
		drawnBand, d.thickM*1e3, d.netM*1e3, d.targetPa/1e6, d.gaugeM*1e3)
}

// within draws evenly between two bounds.
func within(rng *rand.Rand, low, high float64) float64 { return low + (high-low)*rng.Float64() }

// pick draws one of several.
func pick[T any](rng *rand.Rand, of ...T) T { return of[rng.IntN(len(of))] }
