package estimate

import "math"

// intervalFit is the interval-censored fit of one branch, in its frame: y in
// counts.
type intervalFit struct {
	frame
	kept      []float64 // 1 or less; below 1/2 the reading is an outlier
	one       []float64
	a, b, sd  float64
	floor     float64
	stated    bool    // the caller knows how much noise there is
	crossings float64 // code transitions that the readings pass
}

const (
	leastNoise = 1e-4 // stands for none, in counts
	// A reading that lies closer to the line than about five of these, in counts,
	// is no outlier however little noise there is.
	leastGross = 0.1
)

// fitIntervals is the line through readings whose count is coarse against their
// noise. Three ways, by how much noise the code transitions show:
//
//   - Several readings about each transition lie on its wrong side: maximum
//     likelihood, covariance from the observed information times the scatter of
//     the blocks.
//   - Fewer: the likelihood has no rounded top. The line is the mean of all
//     lines by their likelihood (Pitman's estimator), the noise integrated over
//     from its floor on.
//   - None: the same, and the lines of any likelihood to speak of are those that
//     pass through every reading; Feasible has that polygon.
//
// floor is the least noise, in y's unit.
func fitIntervals(r Readings, floor float64, start Line) (Branch, error) {
	f := newIntervalFit(r, floor, start)
	polygon, exact := f.feasible()
	if !exact {
		if err := f.climb(start.ResidualSD / f.perY); err != nil {
			return Branch{}, err
		}
		polygon, exact = f.without().feasible()
	}
	out := Branch{Outliers: f.outliers(), Dependence: 1}
	if exact {
		out.Method, out.Feasible = ByFeasible, &polygon
		f.a, f.b = f.framed(polygon.Centre)
		f.sd = f.floor
	} else {
		out.Method = ByLikelihood
	}
	if f.told() < leastTold && f.sd < sharpCount {
		l := f.byAllNoises()
		f.a, f.b, f.sd = l.A, l.B, l.ResidualSD
		out.Dependence, out.Blocks = f.scores().dependence(r.Memory)
		dof := math.Max(1, float64(out.Blocks-2))
		if !(out.Dependence > 1) {
			out.Dependence, dof = 1, math.Inf(1)
		}
		out.Line = f.lineBack(l).scaled(out.Dependence)
		out.Line.DoF = dof
	} else if err := f.byInformation(&out, r.Memory); err != nil {
		return Branch{}, err
	}
	out.Line.N = len(r.X) - out.Outliers
	return out, nil
}

func newIntervalFit(r Readings, floor float64, start Line) *intervalFit {
	f := &intervalFit{frame: frameOf(r.X, r.Lo, r.Hi), kept: ones(len(r.X)), one: ones(len(r.X))}
	f.floor, f.stated = math.Max(floor/f.perY, leastNoise), floor > 0
	f.a, f.b = f.framed(start)
	f.crossings = math.Max(1, math.Abs(f.b)*(Quantile(f.x, 1)-Quantile(f.x, 0)))
	return f
}

const (
	leastTold  = 2.5 // information a transition, in 1 / sd^2, for the likelihood's top to be round
	sharpCount = 0.2 // noise, in counts, below which the chances at a reading's two ends multiply
)

func (f *intervalFit) framed(l Line) (a, b float64) {
	b = l.B * f.perX / f.perY
	return (l.A + l.B*f.atX - f.atY) / f.perY, b
}

// climb is maximum likelihood by turns with the weights of the outliers, which
// is the EM algorithm for noise mixed with them.
func (f *intervalFit) climb(sd float64) error {
	const rounds, still = 25, 1e-3
	counts := Quantile(f.hi, 1) - Quantile(f.lo, 0)
	f.sd = math.Max(sd, 0.25)
	for round := range rounds {
		moved, gross := 0.0, math.Max(f.sd, leastGross)
		for i := range f.x {
			l, _, _ := cell((f.lo[i]-f.a-f.b*f.x[i])/gross, (f.hi[i]-f.a-f.b*f.x[i])/gross)
			w := honest(l, counts)
			moved = math.Max(moved, math.Abs(w-f.kept[i]))
			f.kept[i] = w
		}
		if round > 0 && moved < still {
			break
		}
		fit, ok := f.likelihood().maximise([]float64{f.a / f.sd, f.b / f.sd, 1 / f.sd}, 1/f.floor)
		if !ok {
			return ErrNoEnd
		}
		c := fit.coefficients()
		f.a, f.b, f.sd = c[0], c[1], fit.sd()
	}
	return nil
}

func (f *intervalFit) likelihood() *censored {
	return &censored{columns: [][]float64{f.one, f.x}, lo: f.lo, hi: f.hi, weight: f.kept}
}

func (f *intervalFit) outliers() int {
	n := 0
	for _, w := range f.kept {
		if w < 0.5 {
			n++
		}
	}
	return n
}

// without is the frame without the outliers.
func (f *intervalFit) without() frame {
	out := f.frame
	out.x, out.lo, out.hi = nil, nil, nil
	for i, w := range f.kept {
		if w >= 0.5 {
			out.x, out.lo, out.hi = append(out.x, f.x[i]), append(out.lo, f.lo[i]), append(out.hi, f.hi[i])
		}
	}
	return out
}

// at is the likelihood about the present line at some noise.
func (f *intervalFit) at(sd float64) censoredFit {
	where := []float64{f.a / sd, f.b / sd, 1 / sd}
	_, _, info := f.likelihood().slopesOf(where)
	return censoredFit{at: where, info: info, atLimit: sd <= f.floor}
}

// told is what one code transition tells of its place: 1.8 sd / (change a
// reading) where that is not small.
func (f *intervalFit) told() float64 {
	return f.at(f.sd).info.At(0, 0) / f.crossings
}

// byInformation is the asymptotic covariance, with the blocks' scatter.
func (f *intervalFit) byInformation(out *Branch, memory int) error {
	fit := f.at(f.sd)
	cov := fit.covariance()
	if cov == nil {
		return ErrNoSpread
	}
	out.Dependence, out.Blocks = f.scores().dependence(memory)
	out.Line = f.lineBack(Line{
		A: f.a, B: f.b, ResidualSD: f.sd,
		VarA: cov.At(0, 0), VarB: cov.At(1, 1), CovAB: cov.At(0, 1),
	}).scaled(out.Dependence)
	out.Line.DoF = math.Max(1, float64(out.Blocks-2))
	return nil
}

// scores is what each reading says against the present line.
func (f *intervalFit) scores() scores {
	s := scores{x: f.x, cell: make([]int, len(f.x))}
	for i, x := range f.x {
		mean := f.a + f.b*x
		za, zb := (f.lo[i]-mean)/f.sd, (f.hi[i]-mean)/f.sd
		_, ha, hb := cell(za, zb)
		s.push = append(s.push, f.kept[i]*(ha-hb))
		s.weight = append(s.weight, f.kept[i]*math.Max(0, (ha-hb)*(ha-hb)-za*ha+zb*hb))
		s.cell[i] = int(math.Floor(mean - (f.lo[0]+f.hi[0])/2))
	}
	if f.sd > 0.5 {
		s.cell = nil
	}
	return s
}
