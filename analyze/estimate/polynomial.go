package estimate

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Polynomial is y = sum of Coef[k] x^k with the covariance of its
// coefficients.
type Polynomial struct {
	Coef       []float64
	Cov        [][]float64
	ResidualSD float64
	DoF        float64
	N          int
	// The fit works in (x - mid) / half, where the columns are well apart.
	mid, half float64
	scaled    []float64
	scaledCov *mat.SymDense
}

// FitPolynomial is the least-squares polynomial of a degree, all y equally
// doubtful, the doubt estimated from the residuals. Needs at least two points
// more than the degree and as many different x. Errors: ErrTooFew,
// ErrNoSpread, ErrBadValue.
func FitPolynomial(x, y []float64, degree int) (Polynomial, error) {
	n, m := len(x), degree+1
	if err := checkPoints(x, y, nil); err != nil {
		return Polynomial{}, err
	}
	if degree < 0 || n < m+1 {
		return Polynomial{}, fmt.Errorf("fit degree %d to %d points: %w", degree, n, ErrTooFew)
	}
	low, high := Quantile(x, 0), Quantile(x, 1)
	p := Polynomial{N: n, DoF: float64(n - m), mid: (low + high) / 2, half: (high - low) / 2}
	if !(p.half > 0) {
		return Polynomial{}, fmt.Errorf("fit degree %d: x: %w", degree, ErrNoSpread)
	}
	a := mat.NewDense(n, m, nil)
	for i := range x {
		for k, z := 0, 1.0; k < m; k, z = k+1, z*(x[i]-p.mid)/p.half {
			a.Set(i, k, z)
		}
	}
	if err := p.solve(a, y); err != nil {
		return Polynomial{}, fmt.Errorf("fit degree %d: x: %w", degree, err)
	}
	p.unscale()
	return p, nil
}

// solve finds the scaled coefficients and their covariance.
func (p *Polynomial) solve(a *mat.Dense, y []float64) error {
	n, m := a.Dims()
	var qr mat.QR
	qr.Factorize(a)
	const singular = 1e12
	if !(qr.Cond() < singular) {
		return ErrNoSpread
	}
	var c mat.VecDense
	if err := qr.SolveVecTo(&c, false, mat.NewVecDense(n, y)); err != nil {
		return fmt.Errorf("%w: %w", ErrNoSpread, err)
	}
	var fitted, normal mat.Dense
	fitted.Mul(a, &c)
	rss := 0.0
	for i := range y {
		r := y[i] - fitted.At(i, 0)
		rss += r * r
	}
	p.ResidualSD = math.Sqrt(rss / p.DoF)
	normal.Mul(a.T(), a)
	var inverse mat.Dense
	if err := inverse.Inverse(&normal); err != nil {
		return fmt.Errorf("%w: %w", ErrNoSpread, err)
	}
	p.scaled = make([]float64, m)
	p.scaledCov = mat.NewSymDense(m, nil)
	for i := range m {
		p.scaled[i] = c.AtVec(i)
		for k := i; k < m; k++ {
			p.scaledCov.SetSym(i, k, inverse.At(i, k)*p.ResidualSD*p.ResidualSD)
		}
	}
	return nil
}

// unscale gives the coefficients of x itself: ((x - mid) / half)^k by the
// binomial theorem.
func (p *Polynomial) unscale() {
	m := len(p.scaled)
	t := mat.NewDense(m, m, nil)
	for k := range m {
		choose := 1.0
		for j := 0; j <= k; j++ {
			t.Set(j, k, choose*math.Pow(-p.mid, float64(k-j))/math.Pow(p.half, float64(k)))
			choose *= float64(k-j) / float64(j+1)
		}
	}
	var c, cov mat.Dense
	c.Mul(t, mat.NewVecDense(m, p.scaled))
	cov.Product(t, p.scaledCov, t.T())
	for i := range m {
		p.Coef = append(p.Coef, c.At(i, 0))
		p.Cov = append(p.Cov, mat.Row(nil, i, &cov))
	}
}

// At is the polynomial at x with its own standard uncertainty there.
func (p Polynomial) At(x float64) (y, std float64) {
	m := len(p.scaled)
	powers := mat.NewVecDense(m, nil)
	for k, z := 0, 1.0; k < m; k, z = k+1, z*(x-p.mid)/p.half {
		powers.SetVec(k, z)
		y += p.scaled[k] * z
	}
	return y, math.Sqrt(math.Max(0, mat.Inner(powers, p.scaledCov, powers)))
}
