package estimate

import (
	"fmt"
	"math"
)

// frame is readings in units of their own: x from its mean in units of its
// spread, y from its middle in units of the widest interval. Metres and pascals
// then cost no digits.
type frame struct {
	x, lo, hi []float64
	atX, perX float64
	atY, perY float64
}

// checkIntervals refuses what is not a series of intervals with two different
// x.
func checkIntervals(x, lo, hi []float64) error {
	if err := checkPoints(x, lo, nil); err != nil {
		return err
	}
	if err := checkPoints(x, hi, nil); err != nil {
		return err
	}
	same := true
	for i := range x {
		if hi[i] < lo[i] {
			return fmt.Errorf("fit a line: interval %d ends at %g, below its start: %w", i, hi[i], ErrBadValue)
		}
		same = same && x[i] == x[0]
	}
	if same {
		return fmt.Errorf("fit a line: x: %w", ErrNoSpread)
	}
	return nil
}

func frameOf(x, lo, hi []float64) frame {
	mid := make([]float64, len(x))
	f := frame{x: make([]float64, len(x)), lo: make([]float64, len(x)), hi: make([]float64, len(x))}
	for i := range x {
		mid[i] = (lo[i] + hi[i]) / 2
		f.perY = math.Max(f.perY, hi[i]-lo[i])
	}
	f.atX, f.perX = Mean(x)
	mean, spread := Mean(mid)
	f.atY = mean
	if f.perY == 0 { // points: no count to measure by
		f.perY = math.Max(spread, math.SmallestNonzeroFloat64)
	}
	for i := range x {
		f.x[i], f.lo[i], f.hi[i] = (x[i]-f.atX)/f.perX, (lo[i]-f.atY)/f.perY, (hi[i]-f.atY)/f.perY
	}
	return f
}

// coefficientsBack puts a line of the frame into the caller's axes.
func (f frame) coefficientsBack(a, b float64) [2]float64 {
	slope := b * f.perY / f.perX
	return [2]float64{f.atY + a*f.perY - slope*f.atX, slope}
}

func (f frame) lineBack(l Line) Line {
	out := l
	c := f.coefficientsBack(l.A, l.B)
	out.A, out.B = c[0], c[1]
	varA, varB, cov := l.VarA*f.perY*f.perY, l.VarB*f.perY*f.perY/(f.perX*f.perX), l.CovAB*f.perY*f.perY/f.perX
	out.VarB = varB
	out.CovAB = cov - f.atX*varB
	out.VarA = varA - 2*f.atX*cov + f.atX*f.atX*varB
	out.ResidualSD = l.ResidualSD * f.perY
	return out
}
