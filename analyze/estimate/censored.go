package estimate

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

// censored is the regression of a value that is only known to lie between lo
// and hi, with normal noise of standard deviation s: the value is the sum of
// the columns times their coefficients. Worked in coefficients / s and
// precision 1 / s, in which the log likelihood is concave (Burridge, JRSS B 43
// (1981) 41-45), so that Newton's method finds the one maximum from any start.
type censored struct {
	columns [][]float64 // one value a reading each
	lo, hi  []float64
	weight  []float64 // nil: ones
	fixed   bool      // the noise stays as it starts
}

// slopesOf is the log likelihood at a point with its gradient and the negative
// of its matrix of second derivatives. The last coordinate is the precision.
func (c *censored) slopesOf(at []float64) (logL float64, gradient []float64, info *mat.SymDense) {
	p := len(c.columns)
	gradient = make([]float64, p+1)
	h := make([]float64, (p+1)*(p+1))
	row := make([]float64, p)
	for i := range c.lo {
		w := 1.0
		if c.weight != nil {
			w = c.weight[i]
		}
		mean := 0.0
		for j, col := range c.columns {
			row[j] = col[i]
			mean += at[j] * col[i]
		}
		a, b := at[p]*c.lo[i]-mean, at[p]*c.hi[i]-mean
		l, ha, hb := cell(a, b)
		logL += w * l
		if ha == 0 && hb == 0 {
			continue
		}
		// Second derivatives of log(Phi(b) - Phi(a)), negative.
		aa, bb, ab := w*(ha*ha-a*ha), w*(hb*hb+b*hb), -w*ha*hb
		for j := range p {
			gradient[j] += w * (ha - hb) * row[j]
			for k := range j + 1 {
				h[j*(p+1)+k] += (aa + 2*ab + bb) * row[j] * row[k]
			}
			h[p*(p+1)+j] -= (aa*c.lo[i] + ab*(c.lo[i]+c.hi[i]) + bb*c.hi[i]) * row[j]
		}
		gradient[p] += w * (hb*c.hi[i] - ha*c.lo[i])
		h[p*(p+1)+p] += aa*c.lo[i]*c.lo[i] + 2*ab*c.lo[i]*c.hi[i] + bb*c.hi[i]*c.hi[i]
	}
	for j := range p + 1 {
		for k := range j {
			h[k*(p+1)+j] = h[j*(p+1)+k]
		}
	}
	return logL, gradient, mat.NewSymDense(p+1, h)
}

// maximise climbs from a start to the maximum, the precision held at or below
// a limit. atLimit says that it ended there: the noise is at its floor. ok is
// false when the readings do not bound the coefficients.
func (c *censored) maximise(start []float64, limit float64) (best censoredFit, ok bool) {
	const steps, enough, fastest = 100, 1e-10, 4.0
	p := len(c.columns)
	at := append([]float64(nil), start...)
	at[p] = math.Min(at[p], limit)
	logL, g, info := c.slopesOf(at)
	for range steps {
		held := c.fixed || at[p] >= limit && g[p] >= 0
		if flat(g, held) {
			return censoredFit{at: at, logL: logL, info: info, atLimit: held}, true
		}
		move, gain, ok := climb(info, g, held)
		if !ok {
			return censoredFit{}, false
		}
		if gain < enough {
			return censoredFit{at: at, logL: logL, info: info, atLimit: held}, true
		}
		share, next := 1.0, make([]float64, p+1)
		for ; share > 1e-9; share /= 2 {
			for j := range at {
				next[j] = at[j] + share*move[j]
			}
			next[p] = math.Min(next[p], limit)
			if !(next[p] > at[p]/fastest && next[p] < at[p]*fastest) {
				continue
			}
			l, ng, ni := c.slopesOf(next)
			if l >= logL+1e-4*share*gain || l >= logL && gain < 1e-6 {
				logL, g, info = l, ng, ni
				break
			}
		}
		if share <= 1e-9 {
			return censoredFit{at: at, logL: logL, info: info, atLimit: held}, true
		}
		at = next
	}
	return censoredFit{}, false
}

// flat is whether no free coordinate gains anything: every reading is certain.
func flat(g []float64, held bool) bool {
	const nothing = 1e-9
	n := len(g)
	if held {
		n--
	}
	for _, v := range g[:n] {
		if math.Abs(v) > nothing {
			return false
		}
	}
	return true
}

type censoredFit struct {
	at      []float64 // coefficients / s, and 1 / s
	logL    float64
	info    *mat.SymDense // in those coordinates
	atLimit bool
}

// climb is Newton's step and the gain that it promises, the last coordinate
// left where it is when held.
func climb(info *mat.SymDense, g []float64, held bool) (move []float64, gain float64, ok bool) {
	n := len(g)
	free := n
	if held {
		free--
	}
	chol, ok := firm(info, free)
	if !ok {
		return nil, 0, false
	}
	x := mat.NewVecDense(free, nil)
	var ill mat.Condition // a long ridge: the step is still uphill
	if err := chol.SolveVecTo(x, mat.NewVecDense(free, append([]float64(nil), g[:free]...))); err != nil && !errors.As(err, &ill) {
		return nil, 0, false
	}
	move = make([]float64, n)
	for j := range free {
		move[j] = x.AtVec(j)
		gain += x.AtVec(j) * g[j]
	}
	return move, gain, true
}

// firm factorises the first n rows and columns, where need be with a little
// more on the diagonal: far from the maximum few readings may say anything.
func firm(info *mat.SymDense, n int) (*mat.Cholesky, bool) {
	const most = 1e-3
	largest := 0.0
	for j := range n {
		largest = math.Max(largest, info.At(j, j))
	}
	var chol mat.Cholesky
	if chol.Factorize(info.SliceSym(0, n)) {
		return &chol, true
	}
	m := mat.NewSymDense(n, nil)
	for share := 1e-12; share < most; share *= 10 {
		m.CopySym(info.SliceSym(0, n))
		for j := range n {
			m.SetSym(j, j, m.At(j, j)+share*largest)
		}
		if chol.Factorize(m) {
			return &chol, true
		}
	}
	return nil, false
}

// sd is the noise's standard deviation.
func (f censoredFit) sd() float64 { return 1 / f.at[len(f.at)-1] }

// coefficients are the columns' own.
func (f censoredFit) coefficients() []float64 {
	out := make([]float64, len(f.at)-1)
	for j := range out {
		out[j] = f.at[j] * f.sd()
	}
	return out
}

// covariance is that of the coefficients from the observed information, with
// what the unknown noise adds; nil where it is singular.
func (f censoredFit) covariance() *mat.SymDense {
	p := len(f.at) - 1
	n := p + 1
	if f.atLimit {
		n = p
	}
	var chol mat.Cholesky
	if !chol.Factorize(f.info.SliceSym(0, n)) {
		return nil
	}
	var inv mat.SymDense
	var ill mat.Condition
	if err := chol.InverseTo(&inv); err != nil && !errors.As(err, &ill) {
		return nil
	}
	turn := mat.NewDense(p, n, nil) // of coefficients by these coordinates
	for j := range p {
		turn.Set(j, j, f.sd())
		if n > p {
			turn.Set(j, p, -f.at[j]*f.sd()*f.sd())
		}
	}
	var half, full mat.Dense
	half.Mul(turn, &inv)
	full.Mul(&half, turn.T())
	out := mat.NewSymDense(p, nil)
	for j := range p {
		for k := range j + 1 {
			out.SetSym(j, k, full.At(j, k))
		}
	}
	return out
}
