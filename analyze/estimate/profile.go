package estimate

import (
	"fmt"
	"math"
)

// InverseOf is the x at which the line through one branch's readings has the value
// y, by those readings alone. Random is the longer side of its 95 % interval over
// Student's t at DoF, for it is the interval that can be trusted:
//
//   - Where readings pass a line exactly: the farthest that any such line says
//     (Feasible).
//   - Where the likelihood has a rounded top: every x whose profile likelihood, the
//     slope and the noise being free, lies above the top less t^2 / 2 (Wilks), the
//     dependence of neighbouring readings allowed for.
//   - Else, which is where few readings about each code transition lie on its wrong
//     side: Fieller's interval of the line that FitBranch gives, the mean over the
//     likelihood.
//
// Errors as FitBranch, and ErrNoEnd where the slope is not told from zero.
func InverseOf(r Readings, y float64) (Estimate, error) {
	b, err := FitBranch(r)
	if err != nil {
		return Estimate{}, err
	}
	out := Estimate{Value: (y - b.A) / b.B, DoF: b.DoF}
	t := Student95(b.DoF)
	lo, hi, ok := b.Fieller(y, 0, t)
	out.Method = "one ramp, Fieller's interval of its line"
	switch {
	case b.Feasible != nil:
		lo, hi = b.Feasible.inverse(y)
		ok, out.Method = true, "one ramp, all lines through its readings"
	case b.Method == ByLikelihood && ok:
		if pLo, pHi, round := profileInverse(r, b, y, t); round {
			lo, hi, out.Method = pLo, pHi, "one ramp, profile likelihood"
		}
	}
	if !ok {
		return Estimate{}, fmt.Errorf("inverse of a branch: %w", ErrNoEnd)
	}
	out.Random = math.Max(hi-out.Value, out.Value-lo) / t
	return out, nil
}

// inverse is the lowest and the highest x at which a line of the set has the value y.
func (f Feasible) inverse(y float64) (lo, hi float64) {
	return f.extent(func(v [2]float64) float64 { return (y - v[0]) / v[1] })
}

// profileInverse is the interval in which the profile likelihood says no worse than
// t^2 / 2 below its top; ok is false where it has no rounded top.
func profileInverse(r Readings, b Branch, y, t float64) (lo, hi float64, ok bool) {
	f := newIntervalFit(r, math.Hypot(r.YStd, b.B*r.XStd), b.Line)
	if f.climb(math.Max(b.ResidualSD/f.perY, f.floor)) != nil || f.told() < leastTold && f.sd < sharpCount {
		return 0, 0, false
	}
	p := profile{f: f, y: (y - f.atY) / f.perY}
	top := (p.y - f.a) / f.b
	best, ok := p.logL(top)
	if !ok {
		return 0, 0, false
	}
	enough := best - t*t/2*math.Max(1, b.Dependence)
	_, std := b.InverseAt(y)
	std /= f.perX
	lo, okLo := p.crosses(top, -std, enough)
	hi, okHi := p.crosses(top, +std, enough)
	return f.atX + lo*f.perX, f.atX + hi*f.perX, okLo && okHi
}

// profile is the likelihood of the x at which a line has the value y, slope and
// noise being what suits it best.
type profile struct {
	f *intervalFit
	y float64
}

func (p profile) logL(x float64) (logL float64, ok bool) {
	n := len(p.f.x)
	c := &censored{columns: [][]float64{make([]float64, n)}, lo: make([]float64, n), hi: make([]float64, n), weight: p.f.kept}
	for i, v := range p.f.x {
		c.columns[0][i], c.lo[i], c.hi[i] = v-x, p.f.lo[i]-p.y, p.f.hi[i]-p.y
	}
	fit, ok := c.maximise([]float64{p.f.b / p.f.sd, 1 / p.f.sd}, 1/p.f.floor)
	return fit.logL, ok
}

// crosses is where the profile falls to a level, going from its top in steps.
func (p profile) crosses(top, step, level float64) (x float64, ok bool) {
	const most, halvings = 12, 30
	in, out := top, top
	for k := 0; ; k++ {
		if k == most {
			return 0, false
		}
		out += step
		l, ok := p.logL(out)
		if !ok {
			return 0, false
		}
		if l < level {
			break
		}
		in = out
	}
	for range halvings {
		middle := (in + out) / 2
		l, ok := p.logL(middle)
		if !ok {
			return 0, false
		}
		if l < level {
			out = middle
		} else {
			in = middle
		}
	}
	return (in + out) / 2, true
}
