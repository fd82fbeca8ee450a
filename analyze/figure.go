package analyze

import (
	"math"

	"tautramp/analyze/estimate"
)

// ramp is what one fitted cycle says: the extension on the setting, rising and
// falling, and the extension at zero tension that both share.
type ramp struct {
	rising, falling estimate.Line
	zeroM           float64       // NaN: not known
	zeroVar         float64       // of scatter, m2
	reach           [2][2]float64 // settings fitted, low and high: rising, falling
	opposed         bool          // the falling settings act the other way: loosening torques
	lift            lift          // where the zero is the lines' own there; else none
	cycle           int           // index into the result's
}

// tied has the zero follow the lines where it is theirs at the slack lift.
func (r ramp) tied() ramp {
	if r.lift.known() {
		r.zeroM = r.lift.zero(r)
	}
	return r
}

// covers is the range of setting that the ramp's line was fitted over.
func (r ramp) covers(d Direction) (low, high float64) {
	if d == Falling {
		return r.reach[1][0], r.reach[1][1]
	}
	return r.reach[0][0], r.reach[0][1]
}

func (r ramp) line(d Direction) estimate.Line {
	if d == Falling {
		return r.falling
	}
	return r.rising
}

// constants turn a ramp into stress and force.
type constants struct {
	modulusPa, gaugeM, areaM2 float64 // of the band that was measured
	otherM2                   float64 // net section of the band that the stress is for; 0: the measured one
}

// paPerM is the band stress of one metre of the measured band's stretch: E / L;
// in another band the same wheel pull makes a stress in the ratio of the net
// sections.
func (k constants) paPerM() float64 {
	if k.otherM2 > 0 {
		return k.modulusPa / k.gaugeM * k.areaM2 / k.otherM2
	}
	return k.modulusPa / k.gaugeM
}

// pullPerM is the wheel pull of one metre of stretch over both spans, N/m:
// F = 2 sigma A_b, whichever band it is asked for.
func (k constants) pullPerM() float64 { return 2 * k.areaM2 * (k.modulusPa / k.gaugeM) }

// figure computes one number from one ramp; NaN where it cannot.
type figure func(r ramp, k constants) float64

// at is the same setting for every ramp.
func at(settingSI float64) figure { return func(ramp, constants) float64 { return settingSI } }

// combine is a figure over all fitted ramps: scatter by what differs from ramp to
// ramp (estimate.Repeat), and what repeats by following each source.
func (w *work) combine(f figure, why string) estimate.Estimate {
	return w.doubted(w.repeat(f).Mean, f, inForces, why)
}

// repeat is a figure over the ramps, with what each ramp's own line leaves open.
func (w *work) repeat(f figure) estimate.Repeated {
	values, vars := make([]float64, len(w.ramps)), make([]float64, len(w.ramps))
	dof := 0.0
	for i, r := range w.ramps {
		values[i] = f(r, w.k)
		vars[i] = withinVar(f, r, w.k)
		dof += math.Min(r.rising.DoF, r.falling.DoF)
	}
	return estimate.Repeat(values, vars, dof)
}

// doubted gives an estimate of a figure what repeats, of the sources that enter
// up to a stage.
func (w *work) doubted(e estimate.Estimate, f figure, upTo stage, why string) estimate.Estimate {
	if !e.Known() || math.IsNaN(e.Value) || math.IsInf(e.Value, 0) {
		return estimate.Unknown(why)
	}
	var parts []estimate.Component
	e.Flat = 0
	for _, s := range w.sources {
		if s.enter > upTo {
			continue
		}
		std := w.follow(f, s)
		parts = append(parts, estimate.Component{Std: std, DoF: math.Inf(1)})
		if s.flat {
			e.Flat = math.Max(e.Flat, std)
		}
	}
	e.System = estimate.RootSum(parts)
	return e
}

// follow is the standard uncertainty that a source gives a figure: it is moved
// up and down by its own, and the mean of the ramps watched (JCGM 100, 5.1.3
// note 2), of those that give the figure.
func (w *work) follow(f figure, s source) float64 {
	sum := 0.0
	for _, move := range s.moves {
		moved, size, n := 0.0, 0.0, 0.0
		for _, r := range w.ramps {
			if !finite(f(r, w.k)) {
				continue
			}
			n++
			up, kUp := move(r, w.k, +1)
			down, kDown := move(r, w.k, -1)
			high, low := f(up, kUp), f(down, kDown)
			moved += (high - low) / 2
			size += math.Abs(high) + math.Abs(low)
		}
		by := unlessRounding(math.Abs(moved), size) / math.Max(1, n)
		sum += by * by
	}
	return math.Sqrt(sum)
}

// unlessRounding is v, or 0 where it is no more than the rounding of figures of
// that size: what is left then differs from machine to machine.
func unlessRounding(v, size float64) float64 {
	if math.Abs(v) <= 1e-12*size {
		return 0
	}
	return v
}

// withinVar is the variance that one ramp's own scatter gives a figure. Each
// line is moved along its two independent directions: as a whole at the centre
// of its points, and in slope about that centre.
func withinVar(f figure, r ramp, k constants) float64 {
	sum := 0.0
	add := func(move func(r *ramp, sign float64)) {
		up, down := r, r
		move(&up, +1)
		move(&down, -1)
		half := (f(up, k) - f(down, k)) / 2
		sum += half * half
	}
	add(func(r *ramp, sign float64) { r.rising = lifted(r.rising, sign); *r = r.tied() })
	add(func(r *ramp, sign float64) { r.rising = tilted(r.rising, sign); *r = r.tied() })
	add(func(r *ramp, sign float64) { r.falling = lifted(r.falling, sign); *r = r.tied() })
	add(func(r *ramp, sign float64) { r.falling = tilted(r.falling, sign); *r = r.tied() })
	if r.zeroVar > 0 {
		add(func(r *ramp, sign float64) { r.zeroM += sign * math.Sqrt(r.zeroVar) })
	}
	return sum
}

func lifted(l estimate.Line, sign float64) estimate.Line {
	if l.VarB > 0 {
		l.A += sign * math.Sqrt(math.Max(0, l.VarA-l.CovAB*l.CovAB/l.VarB))
	}
	return l
}

func tilted(l estimate.Line, sign float64) estimate.Line {
	if l.VarB > 0 {
		by := sign * math.Sqrt(l.VarB)
		l.B += by
		l.A += by * l.CovAB / l.VarB
	}
	return l
}
