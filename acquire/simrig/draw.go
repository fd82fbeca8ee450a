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
func Draw(rng *rand.Rand) (Config, error) { return DrawSetBy(rng, mill.SetByPressure) }

// DrawSetBy is Draw for a tensioner set by something else.
func DrawSetBy(rng *rand.Rand, by mill.SetBy) (Config, error) {
	d := drawBand(rng)
	text := ""
	if by == mill.SetByPressure {
		text = d.oil(rng)
	} else {
		text = d.screw(rng, by)
	}
	p, err := mill.Parse([]byte(text + d.rest()))
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
	c.Torque.NoiseSI = within(rng, 0.02, 0.08)
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
	thickM, netM  float64
	targetPa      float64
	loopM, gaugeM float64
	pullN         float64 // at the target, both spans
	workPa        float64 // pressure there, about
}

func drawBand(rng *rand.Rand) drawn {
	d := drawn{
		thickM: within(rng, 0.9e-3, 1.9e-3), netM: within(rng, 40e-3, 180e-3),
		targetPa: within(rng, 50e6, 100e6), loopM: within(rng, 5, 13), gaugeM: within(rng, 0.3, 0.55),
	}
	d.pullN = 2 * d.targetPa * d.thickM * d.netM
	return d
}

// head is the mill and what its tensioner's rehearsal has in common.
func (d *drawn) head(by mill.SetBy, limit string) string {
	return fmt.Sprintf("[mill]\nname = \"drawn mill\"\n[[tensioner]]\nname = %q\nset_by = %q\nsetting_limit = %q\n", drawnTensioner, by, limit)
}

// hidden is the rehearsal table, but for what only a screw has.
func (d *drawn) hidden(f0N, mu, weightN float64) string {
	return fmt.Sprintf(`[tensioner.rehearsal]
friction_constant = "%.6g N"
friction_proportional = %.6g
weight = "%.6g N"
band_loop = "%.6g m"
`, f0N, mu, weightN, d.loopM)
}

// oil is a tensioner with one or two cylinders.
func (d *drawn) oil(rng *rand.Rand) string {
	cylinders := float64(1 + rng.IntN(2))
	weight := within(rng, 0.05, 0.2) * d.pullN
	d.workPa = within(rng, 350, 1000) * psiPa
	bore := math.Round(math.Sqrt(4*(d.pullN+weight)/d.workPa/math.Pi/cylinders)*1e3) / 1e3
	d.workPa = (d.pullN + weight) / (cylinders * math.Pi / 4 * bore * bore)
	return d.head(mill.SetByPressure, fmt.Sprintf("%.0f Pa", 1.4*d.workPa)) + fmt.Sprintf(`cylinders = %.0f
bore = "%.6g mm"
lifted_weight = "%.6g N"
hold = "maintained"
`, cylinders, bore*1e3, weight) + d.hidden(within(rng, 0.003, 0.012)*d.pullN, within(rng, 0.004, 0.012), weight)
}

// screw is a tensioner with a greased trapezoidal screw and springs; its profile
// knows the frictions to two digits.
func (d *drawn) screw(rng *rand.Rand, by mill.SetBy) string {
	weight := within(rng, 0, 0.1) * d.pullN
	size := math.Round(within(rng, 9, 13) * math.Sqrt(d.pullN/1e3/9) * 2) // mm, for a bearable load on the thread
	lead := math.Round(0.2 * size)
	squeeze, free := within(rng, 6, 12), within(rng, 70, 150) // mm at the target, mm
	thread, collar, restNM := within(rng, 0.08, 0.14), within(rng, 0.01, 0.03), within(rng, 0.2, 0.6)
	// Twice the expected setting, each in its own measure.
	limit := fmt.Sprintf("%.4g N m", 2*(d.pullN+weight)*(size/2e3*0.9*(0.064+thread)+collar*0.6*size/1e3))
	switch by {
	case mill.SetByTurns:
		limit = "60 turns"
	case mill.SetBySpring:
		limit = fmt.Sprintf("%.4g mm", free-1.9*squeeze)
	}
	rate := (d.pullN + weight) / squeeze // N/mm
	return d.head(by, limit) + fmt.Sprintf(`lifted_weight = "%.6g N"
[tensioner.screw]
diameter = "%.6g mm"
lead = "%.6g mm"
collar_radius = "%.6g mm"
rest_torque = "%.4g N m"
thread_friction = %.2g
collar_friction = %.2g
[tensioner.spring]
under_load = "shorter"
rate = "%.6g N/mm"
free_length = "%.6g mm"
`, weight, size, lead, 0.6*size, restNM, thread, collar, rate, free) +
		d.hidden(within(rng, 0.001, 0.004)*d.pullN, within(rng, 0.001, 0.005), weight) + fmt.Sprintf(`friction_thread = %.4g
friction_collar = %.4g
rest_torque = "%.4g N m"
play = "%.4g deg"
give_stiffness = "%.6g N/mm"
spring_rate = "%.6g N/mm"
spring_free = "%.6g mm"
spring_bind = "%.6g mm"
`, thread, collar, restNM, within(rng, 0, 8), d.pullN/within(rng, 0.5, 1.5), rate, free, free-2*squeeze)
}

// rest is the band, the measuring rig and the instruments.
func (d *drawn) rest() string {
	return fmt.Sprintf(`[[band]]
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
name = "torque wrench"
serial = "R-W"
measures = "setting"
limit = "1 N m"
[[instrument]]
name = "indicator"
serial = "R-X"
measures = "extension"
limit = "0.003 mm"
`, drawnBand, d.thickM*1e3, d.netM*1e3, d.targetPa/1e6, d.gaugeM*1e3)
}

// within draws evenly between two bounds.
func within(rng *rand.Rand, low, high float64) float64 { return low + (high-low)*rng.Float64() }

// pick draws one of several.
func pick[T any](rng *rand.Rand, of ...T) T { return of[rng.IntN(len(of))] }
