package simrig

import "fmt"

// Vary is what differs from cycle to cycle and is told by nothing else.
type Vary struct {
	Mu float64 // standard deviation of the proportional friction: 0.003 moves the setting by 0.3 %; 0 means none
	F0 float64 // standard deviation of the constant friction, part of it; 0 means none
}

// variation is the friction of one cycle.
type variation struct{ f0N, mu float64 }

// moreCycles is how many cycles beyond the drive's end have their friction
// drawn, for the setting after the last.
const moreCycles = 4

// vary draws the friction of each cycle, and of a few more.
func (r *rehearsal) vary() error {
	if r.Vary.Mu < 0 || r.Vary.F0 < 0 || r.Vary.F0 > 0.3 || r.Vary.Mu > 0.1 {
		return fmt.Errorf("%w: friction that varies by %g of mu and %g of F0", ErrConfig, r.Vary.Mu, r.Vary.F0)
	}
	rng := newRand(r.Seed, streamVary, 0)
	slide := r.start.slide
	total := cycles(r.Drive.Exercise, 1) + cycles(r.Drive.Ramps, 3) + moreCycles
	for range total {
		v := variation{mu: max(0, slide.mu+r.Vary.Mu*rng.NormFloat64()), f0N: slide.f0N * max(0, 1+r.Vary.F0*rng.NormFloat64())}
		r.varies = append(r.varies, v)
		r.truth.Cycles = append(r.truth.Cycles, CycleFriction{F0N: v.f0N + r.start.seals.f0N, Mu: v.mu})
	}
	return nil
}

// varied gives the wheel the friction of a cycle.
func (r *rehearsal) varied(w *wheel, cycle int) {
	if v := r.varies[min(cycle, len(r.varies)-1)]; r.Vary != (Vary{}) {
		w.slide.f0N, w.slide.mu = v.f0N, v.mu
	}
}
