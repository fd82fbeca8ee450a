package findings

import (
	"math"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// stroke is one push of a pump in a rise, and the fall of the setting after it.
type stroke struct {
	fromSI, topSI float64 // setting before the push and at its top
	fallSI        float64 // from the top to the lowest before the next push
	fellM         float64 // how far the stretch fell meanwhile
	gainSI        float64 // of this top over the last one
	taut          bool
}

// strokes cuts a rise into pushes.
func (d *data) strokes(c analyze.Cycle) []stroke {
	if c.Peak <= c.First || c.Peak >= len(d.t) || !d.usable() {
		return nil
	}
	p := d.follow.p[c.First : c.Peak+1]
	band := math.Max(6*estimate.Noise(p), 0.002*c.TopSI)
	turns := analyze.Turning(p, band)
	var out []stroke
	lastTop := math.NaN()
	for k := 1; k < len(turns); k++ {
		from, top := turns[k-1], turns[k]
		if p[top] <= p[from] {
			continue
		}
		s := stroke{fromSI: p[from], topSI: p[top], gainSI: p[top] - lastTop, fallSI: math.NaN()}
		i := c.First + top
		s.taut = d.e[i] > d.zeroM()+tautShare*d.workingM
		if k+1 < len(turns) {
			low := c.First + turns[k+1]
			s.fallSI = p[top] - p[turns[k+1]]
			s.fellM = d.e[i] - d.e[low]
		}
		lastTop = p[top]
		out = append(out, s)
	}
	return out
}

const (
	// tautShare is the part of the working stretch above which the band is taut
	// for certain. Judgement.
	tautShare = 0.05
	// Fewer strokes are no pump. Judgement.
	leastStrokes = 6
)

const noStrokes = "the setting did not rise in strokes: pump one ramp by hand"

// soft is how many more strokes the same rise of setting takes low down: the
// gain of a stroke in the upper half of the taut range over that in its lowest
// fifth.
func (d *data) soft() estimate.Estimate {
	var values, stds []float64
	for _, c := range d.r.Cycles {
		if c.Role == analyze.Incomplete {
			continue
		}
		if v, s, ok := softness(d.strokes(c)); ok {
			values, stds = append(values, v), append(stds, s)
		}
	}
	return over(values, stds, "rise of setting a stroke", noStrokes)
}

func softness(all []stroke) (ratio, std float64, ok bool) {
	var taut []stroke
	for _, s := range all {
		if s.taut && !math.IsNaN(s.gainSI) {
			taut = append(taut, s)
		}
	}
	if len(taut) < 2*leastStrokes {
		return 0, 0, false
	}
	low, high := taut[0].topSI, taut[len(taut)-1].topSI
	var lower, upper []float64
	for _, s := range taut[:len(taut)-1] { // the last one stops on the top
		switch share := (s.topSI - low) / (high - low); {
		case share <= 0.2:
			lower = append(lower, s.gainSI)
		case share >= 0.5:
			upper = append(upper, s.gainSI)
		}
	}
	ml, sl := estimate.Mean(lower)
	mu, su := estimate.Mean(upper)
	if len(lower) < 2 || len(upper) < 3 || !(ml > 0) {
		return 0, 0, false
	}
	ratio = mu / ml
	nl, nu := float64(len(lower)), float64(len(upper))
	return ratio, ratio * math.Sqrt(sl*sl/nl/ml/ml+su*su/nu/mu/mu+0.01*0.01), true
}

// collapse is how far the setting falls after a stroke while the stretch holds,
// in widths that friction locks.
func (d *data) collapse() estimate.Estimate {
	var shares []float64
	for _, c := range d.r.Cycles {
		for _, s := range d.strokes(c) {
			lock := d.lockAt(s.topSI)
			if math.IsNaN(s.fallSI) || !s.taut || !(lock > 0) {
				continue
			}
			if s.fellM > 0.3*d.down.b*s.fallSI+2*d.noiseM {
				shares = append(shares, 0)
				continue
			}
			shares = append(shares, s.fallSI/lock)
		}
	}
	if len(shares) < leastStrokes {
		return estimate.Unknown(noStrokes)
	}
	half := d.r.Working.HalfSI
	v := estimate.Median(shares)
	return known(v, v*half.Std()/math.Max(half.Value, half.Std()), 10, "median over the strokes")
}

// ragged is the largest fall within a rise, in widths that friction locks, and
// no narrower than a twentieth of the working setting: what is smaller does no
// harm.
func (d *data) ragged() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded")
	}
	worst := 0.0
	for _, c := range d.r.Cycles {
		if c.Rising.Points == 0 {
			continue
		}
		best := math.Inf(-1)
		for i := c.First; i <= c.Peak && i < len(d.t); i++ {
			best = math.Max(best, d.follow.p[i])
			if d.follow.good[i] {
				worst = math.Max(worst, (best-d.follow.p[i])/math.Max(d.lockAt(best), 0.05*d.workingSI))
			}
		}
	}
	half := d.r.Working.HalfSI
	doubt := 0.0
	if half.Known() && d.lockSI > 0.05*d.workingSI {
		doubt = worst * half.Std() / half.Value
	}
	return known(worst, doubt, 10, "highest setting so far less the setting")
}
