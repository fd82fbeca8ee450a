package estimate

import "math"

// FitBranch is the straight line of y on x through a branch's readings. It
// chooses the estimator by how the display's count compares with the noise of
// one reading, as a robust line leaves it: the both-variable fit where the
// count is no larger, the interval-censored one where it is. Method of the
// result says which.
//
// Both give readings that the rest does not explain no weight, and count them:
// a few in a hundred do no harm. Both allow for neighbouring readings' common
// errors by the scatter of blocks. x is taken as it is: noise in x of standard
// deviation XStd makes the slope of the interval-censored fit too small by up
// to XStd^2 over the variance of x, 0.02 % for 2.4 in a range of 600, and by
// nothing where the branch was cut at a value of x.
//
// The noise that the caller states is believed to be about the noise: a tenth
// of it makes intervals too narrow where there is less of it than x changes
// from reading to reading; several times of it makes them too wide.
//
// Errors: ErrTooFew, ErrNoSpread, ErrBadValue, ErrNoEnd.
func FitBranch(r Readings) (Branch, error) {
	if err := checkIntervals(r.X, r.Lo, r.Hi); err != nil {
		return Branch{}, err
	}
	count, mid := 0.0, make([]float64, len(r.X))
	for i := range mid {
		mid[i] = (r.Lo[i] + r.Hi[i]) / 2
		count = math.Max(count, r.Hi[i]-r.Lo[i])
	}
	start, err := startLine(r.X, mid)
	if err != nil {
		return Branch{}, err
	}
	floor := math.Hypot(r.YStd, start.B*r.XStd)
	noise := math.Sqrt(math.Max(floor*floor, start.ResidualSD*start.ResidualSD-count*count/12))
	if count <= noise {
		return fitBothBlocks(r, mid, count, start)
	}
	return fitIntervals(r, floor, start)
}

// startLine is a robust line, its ResidualSD the residuals' MAD.
func startLine(x, y []float64) (Line, error) {
	a, b, err := robustStart(x, y)
	if err != nil {
		return Line{}, err
	}
	return Line{A: a, B: b, ResidualSD: MAD(residuals(x, y, a, b))}, nil
}

func residuals(x, y []float64, a, b float64) []float64 {
	rest := make([]float64, len(x))
	for i := range x {
		rest[i] = y[i] - a - b*x[i]
	}
	return rest
}

// bothFit is the both-variable fit of readings of a fine count, by turns with
// the weights of the outliers.
type bothFit struct {
	x, y   []float64
	ux, uy float64
	span   float64   // of y
	kept   []float64 // 1 or less; below 1/2 the reading is an outlier
	line   Line
	sd     float64 // of the residuals
}

func fitBothBlocks(r Readings, mid []float64, count float64, start Line) (Branch, error) {
	f := &bothFit{x: r.X, y: mid, kept: ones(len(mid)), line: start}
	f.ux, f.uy = r.XStd, math.Sqrt(r.YStd*r.YStd+count*count/12)
	if f.ux == 0 && f.uy == 0 {
		f.uy = 1 // of no account: the scatter decides
	}
	f.span = Quantile(mid, 1) - Quantile(mid, 0)
	if f.sd = start.ResidualSD; f.sd == 0 { // more than half lie on the line
		f.sd = math.Hypot(f.uy, start.B*f.ux)
	}
	if err := f.settle(); err != nil {
		return Branch{}, err
	}
	return f.branch(r.Memory), nil
}

func (f *bothFit) settle() error {
	const rounds, still = 20, 1e-3
	for round := range rounds {
		moved := 0.0
		for i, rest := range residuals(f.x, f.y, f.line.A, f.line.B) {
			z := rest / f.sd
			w := honest(-z*z/2-lnSqrt2Pi, f.span/f.sd)
			moved = math.Max(moved, math.Abs(w-f.kept[i]))
			f.kept[i] = w
		}
		if round > 0 && moved < still {
			break
		}
		if err := f.fit(); err != nil {
			return err
		}
	}
	return nil
}

// fit is the line at the present weights.
func (f *bothFit) fit() (err error) {
	const none, rounding = 1e-12, 1e-12
	ux, uy := make([]float64, len(f.x)), make([]float64, len(f.x))
	for i, w := range f.kept {
		by := 1 / math.Sqrt(math.Max(w, none))
		ux[i], uy[i] = f.ux*by, f.uy*by
	}
	if f.line, err = FitBoth(f.x, ux, f.y, uy); err != nil {
		return err
	}
	sum, all := 0.0, -2.0
	for i, rest := range residuals(f.x, f.y, f.line.A, f.line.B) {
		sum += f.kept[i] * rest * rest
		all += f.kept[i]
	}
	f.sd = math.Max(math.Sqrt(sum/all), rounding*f.span)
	return nil
}

// branch takes the covariance from the blocks' scatter, which also makes good
// what the stated ux and uy have too much or too little.
func (f *bothFit) branch(memory int) Branch {
	s := scores{x: f.x}
	each := 1 / (f.sd * f.sd)
	out := Branch{Method: ByBoth}
	for i, rest := range residuals(f.x, f.y, f.line.A, f.line.B) {
		s.push = append(s.push, f.kept[i]*each*rest)
		s.weight = append(s.weight, f.kept[i]*each)
		if f.kept[i] < 0.5 {
			out.Outliers++
		}
	}
	out.Dependence, out.Blocks = s.dependence(memory)
	stated := math.Hypot(f.uy, f.line.B*f.ux)
	out.Line = f.line.scaled(out.Dependence * f.sd * f.sd / (stated * stated))
	out.Line.ResidualSD = f.sd
	out.Line.DoF = math.Max(1, float64(out.Blocks-2))
	out.Line.N = len(f.x) - out.Outliers
	return out
}
