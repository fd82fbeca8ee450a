package analyze

import (
	"fmt"
	"math"
	"math/rand/v2"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Trial is one figure by Monte Carlo, beside its own interval.
type Trial struct {
	Name  string            // of the figure
	Role  mill.Role         // its unit; "" for a bare number
	Own   estimate.Estimate // the figure with the interval of every other report
	Drawn estimate.Propagated
	Agree bool // both intervals end alike, to one significant digit of the standard uncertainty
}

// Trials propagates distributions through the whole analysis (JCGM 101:2008): each
// source drawn from its own, rectangular or normal, and scatter from Student's t
// with the ramps' degrees of freedom. The same source gives the same result. A
// figure whose interval disagrees is named among the warnings (clause 8): with few
// ramps t has tails that no combined number of degrees of freedom has. Errors: as
// estimate.Propagate.
func (r *Result) Trials(trials int, random *rand.Rand) error {
	w, target := r.work, r.Setup.TargetPa
	if w == nil || len(w.ramps) == 0 {
		return ErrNoCycle
	}
	setting := r.Setup.Tensioner.SettingRole()
	type drawn struct {
		name string
		role mill.Role
		own  estimate.Estimate
		f    figure
	}
	list := []drawn{
		{"rising setting for the target", setting, r.AtRising.TrueSI, settingFigure(Rising, target)},
		{"falling setting for the target", setting, r.AtFalling.TrueSI, settingFigure(Falling, target)},
		{"half-width of the loop", setting, r.Working.HalfSI, halfWidth(r.Working.RisingSI)},
		{"mu", "", r.Friction.Mu, func(q ramp, k constants) float64 { return balanceOf(q, k).mu() }},
		{"F0", mill.RoleForce, r.Friction.F0N, func(q ramp, k constants) float64 { return balanceOf(anyZero(q), k).f0N() }},
	}
	r.Tried = nil
	for _, d := range list {
		if !d.own.Known() {
			continue
		}
		p, err := estimate.Propagate(random, trials, 0.95, func(rng *rand.Rand) float64 { return w.draw(rng, d.f, d.own) })
		if err != nil {
			return fmt.Errorf("trials of %s: %w", d.name, err)
		}
		lo, hi := d.own.Interval95()
		tolerance := estimate.NumericalTolerance(p.Std, 1)
		t := Trial{Name: d.name, Role: d.role, Own: d.own, Drawn: p, Agree: math.Abs(lo-p.Low) <= tolerance && math.Abs(hi-p.High) <= tolerance}
		if !t.Agree {
			w.warn("trials-differ", fmt.Sprintf("By %d trials the interval is another than the one printed, by more than one significant digit of its uncertainty: %s. Trust the wider.", trials, d.name))
		}
		r.Tried = append(r.Tried, t)
	}
	return nil
}

// draw is one drawing of a figure about its own value: all sources moved at once,
// and scatter on top.
func (w *work) draw(rng *rand.Rand, f figure, own estimate.Estimate) float64 {
	moved := make([]ramp, len(w.ramps))
	copy(moved, w.ramps)
	k := w.k
	for _, s := range w.sources {
		for m, by := range s.drawn(rng) {
			was := k
			for i := range moved {
				moved[i], k = s.moves[m](moved[i], was, by)
			}
		}
	}
	sum, still := 0.0, 0.0
	for i := range moved {
		sum += f(moved[i], k)
		still += f(w.ramps[i], w.k)
	}
	n := float64(len(moved))
	scatter := estimate.Estimate{Random: own.Random, DoF: own.DoF}
	return own.Value + (sum-still)/n + estimate.DrawEstimate(rng, scatter)
}

// drawn is by how much each of a source's moves is made: independent normals, or
// for a rectangular one the coordinates of a point on a sphere, of which any one
// is rectangular, and any mean of two with weights as well.
func (s source) drawn(rng *rand.Rand) []float64 {
	out := make([]float64, len(s.moves))
	if !s.flat {
		for i := range out {
			out[i] = rng.NormFloat64()
		}
		return out
	}
	point := [3]float64{rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}
	length := math.Sqrt(point[0]*point[0] + point[1]*point[1] + point[2]*point[2])
	for i := range out {
		out[i] = math.Sqrt(3) * point[i%3] / length
	}
	return out
}
