package analyze

import "math"

// path is a setting over time, Pa.
type path struct {
	t, p   []float64
	begins []int // where cycles begin
}

const pathStepS = 0.02

func (h *path) now() float64 {
	if len(h.p) == 0 {
		return 0
	}
	return h.p[len(h.p)-1]
}

func (h *path) add(p float64) {
	h.t, h.p = append(h.t, float64(len(h.t))*pathStepS), append(h.p, p)
}

func (h *path) hold(s float64) {
	for range int(s / pathStepS) {
		h.add(h.now())
	}
}

func (h *path) to(p, perS float64) {
	for math.Abs(p-h.now()) > perS*pathStepS {
		h.add(h.now() + math.Copysign(perS*pathStepS, p-h.now()))
	}
	h.add(p)
}

// strokes is a hand pump: each stroke of 0.6 s is followed by 1.4 s in which
// the pressure sags by a share of itself.
func (h *path) strokes(p, perStroke, sag float64) {
	for peak := h.now(); peak < p; {
		peak = math.Min(p, peak+perStroke)
		h.to(peak, (peak-h.now())/0.6+1)
		for i := range int(1.4 / pathStepS) {
			h.add(peak * (1 - sag*(1-math.Exp(-float64(i)*pathStepS/0.35))))
		}
	}
	h.to(p, perStroke)
}

// releases is a hand valve: each release of 0.6 s is followed by 1.4 s in which
// the pressure comes back by a share of itself.
func (h *path) releases(p, perStroke, rebound float64) {
	for low := h.now(); low > p; {
		low = math.Max(p, low-perStroke)
		h.to(low, (h.now()-low)/0.6+1)
		for i := range int(1.4 / pathStepS) {
			h.add(low * (1 + rebound*(1-math.Exp(-float64(i)*pathStepS/0.35))))
		}
	}
	h.to(p, perStroke)
}

func (h *path) stairs(p float64, steps int, perS, holdS float64) {
	from := h.now()
	for i := 1; i <= steps; i++ {
		h.to(from+(p-from)*float64(i)/float64(steps), perS)
		h.hold(holdS)
	}
}

// shape is how the pressure is brought up to the top; it comes down smoothly,
// or in steps.
type shape string

const (
	smooth shape = "smooth"
	pumped shape = "strokes with 1 % sag"
	stairs shape = "stairs"
)

// cycles is a whole visit from low to top, psi; the first only to half.
func cycles(s shape, n int, low, top float64) *path {
	h := &path{}
	h.add(low * psi)
	h.hold(5)
	for i := range n {
		h.begins = append(h.begins, len(h.p))
		high := top
		if i == 0 && n > 1 {
			high = low + 0.6*(top-low)
		}
		switch s {
		case pumped:
			h.strokes(high*psi, 16*psi, 0.01)
		case stairs:
			h.stairs(high*psi, 8, 8*psi, 6)
		default:
			h.to(high*psi, 8*psi)
		}
		h.hold(5)
		if s == stairs {
			h.stairs(low*psi, 8, 8*psi, 6)
		} else {
			h.to(low*psi, 8*psi)
		}
		h.hold(5)
	}
	return h
}

// rated is a visit of smooth ramps, psi/s each, one cycle of each rate; the
// first for exercise.
func rated(low, top, restS float64, rates ...float64) *path {
	h := &path{}
	h.add(low * psi)
	h.hold(5)
	for _, rate := range rates {
		h.begins = append(h.begins, len(h.p))
		h.to(top*psi, rate*psi)
		h.hold(restS)
		h.to(low*psi, rate*psi)
		h.hold(5)
	}
	return h
}
