package estimate

import "math"

// bounds are the ends of readings as one-sided statements about the true value
// at x: it is at or above y for side +1, at or below it for side -1.
type bounds struct {
	x, y, side []float64
}

// add takes both ends of a reading.
func (b *bounds) add(x, lo, hi float64) {
	b.x, b.y, b.side = append(b.x, x, x), append(b.y, lo, hi), append(b.side, 1, -1)
}

// near is the bounds that some line of a window puts in doubt when the noise is
// sd.
func (b bounds) near(w window, sd float64) bounds {
	const reach = 6.0
	var out bounds
	for i, x := range b.x {
		room := b.side[i] * (w.a + w.b*x - b.y[i])
		if room < reach*sd+w.half(x) {
			out.x, out.y, out.side = append(out.x, x), append(out.y, b.y[i]), append(out.side, b.side[i])
		}
	}
	return out
}

// window is a part of the plane of A and B: a line with the covariance of its
// coefficients, as far as a few standard deviations from it.
type window struct{ a, b, varA, varB, cov float64 }

const (
	windowReach = 4.5 // standard deviations
	windowSteps = 7   // grid points to either side
)

// half is by how much lines of the window differ from its middle one at x, at
// most.
func (w window) half(x float64) float64 {
	return math.Sqrt2 * windowReach * math.Sqrt(math.Max(0, w.varA+2*x*w.cov+x*x*w.varB))
}

// axes are two independent directions of A and B, a standard deviation each.
func (w window) axes() (tilt, lift [2]float64) {
	sb := math.Sqrt(w.varB)
	return [2]float64{w.cov / sb, sb}, [2]float64{math.Sqrt(math.Max(0, w.varA-w.cov*w.cov/w.varB)), 0}
}

// spread integrates the likelihood at one noise over the window, a flat prior
// on A and B. logMass is the log of the integral.
func (b bounds) spread(w window, sd float64, phi *lnPhi) (out window, logMass float64) {
	const side, nothing = 2*windowSteps + 1, 30.0
	tilt, lift := w.axes()
	act := b.near(w, sd)
	step := windowReach / windowSteps
	var l [side * side]float64
	best := act.logL(w.a, w.b, sd, phi, math.Inf(-1))
	for k := range l {
		u, v := float64(k/side-windowSteps)*step, float64(k%side-windowSteps)*step
		l[k] = act.logL(w.a+u*tilt[0]+v*lift[0], w.b+u*tilt[1], sd, phi, best-nothing)
		best = math.Max(best, l[k])
	}
	var m, mu, mv, uu, uv, vv float64
	for k := range l {
		u, v := float64(k/side-windowSteps)*step, float64(k%side-windowSteps)*step
		p := math.Exp(l[k] - best)
		m += p
		mu, mv = mu+p*u, mv+p*v
		uu, uv, vv = uu+p*u*u, uv+p*u*v, vv+p*v*v
	}
	mu, mv = mu/m, mv/m
	uu, uv, vv = uu/m-mu*mu, uv/m-mu*mv, vv/m-mv*mv
	out.a, out.b = w.a+mu*tilt[0]+mv*lift[0], w.b+mu*tilt[1]
	out.varA = uu*tilt[0]*tilt[0] + 2*uv*tilt[0]*lift[0] + vv*lift[0]*lift[0]
	out.cov = uu*tilt[0]*tilt[1] + uv*lift[0]*tilt[1]
	out.varB = uu * tilt[1] * tilt[1]
	return out, best + math.Log(m*step*step*tilt[1]*lift[0])
}

// logL is the log likelihood of a line, as far as these bounds tell; below
// least it is of no account how far.
func (b bounds) logL(a, slope, sd float64, phi *lnPhi, least float64) float64 {
	sum, per := 0.0, 1/sd
	for i, x := range b.x {
		if sum += phi.at(b.side[i] * (a + slope*x - b.y[i]) * per); sum < least {
			break
		}
	}
	return sum
}

// settled integrates again until the window fits what it holds.
func (b bounds) settled(w window, sd float64, phi *lnPhi) (out window, logMass float64) {
	const passes = 12
	for range passes {
		out, logMass = b.spread(w, sd, phi)
		moved := math.Abs(out.b-w.b) / math.Sqrt(w.varB)
		if grew := math.Sqrt(out.varB / w.varB); moved < 0.7 && grew > 0.7 && grew < 1.4 {
			break
		}
		w = out
	}
	return out, logMass
}

// lnPhi is a table of the log of the normal distribution function, straight
// between its points; the likelihood asks for it some million times.
type lnPhi struct{ table []float64 }

const (
	lnPhiLow, lnPhiHigh = -40.0, 8.0
	lnPhiPer            = 32.0 // points a unit
)

func newLnPhi() *lnPhi {
	t := make([]float64, int((lnPhiHigh-lnPhiLow)*lnPhiPer)+2)
	for i := range t {
		z := lnPhiLow + float64(i)/lnPhiPer
		t[i] = math.Log(mills(-z)) - z*z/2 - lnSqrt2Pi
	}
	return &lnPhi{t}
}

func (p *lnPhi) at(z float64) float64 {
	switch {
	case z >= lnPhiHigh:
		return 0
	case z < lnPhiLow:
		return -z * z / 2
	}
	at := (z - lnPhiLow) * lnPhiPer
	i := int(at)
	return p.table[i] + (at-float64(i))*(p.table[i+1]-p.table[i])
}
