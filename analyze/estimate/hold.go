package estimate

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// HoldKind is how a held value goes. The zero value is not settled.
type HoldKind string

// The kinds. A leak runs down evenly or to an end. Creep slows down for ever,
// and to a third or less by the end of the record: what slows down less has the
// shape of a steady leak.
const (
	HoldUnsettled HoldKind = ""
	HoldStill     HoldKind = "still"
	HoldLeak      HoldKind = "leak"
	HoldCreep     HoldKind = "creep"
)

// Hold is a record of a value that should stand still. Each law is fitted to it
// whole; Kind says which one it is, if one can be told.
type Hold struct {
	Kind HoldKind
	// Rate is the slope of a straight line, per s: still within doubt when it is
	// not told from nothing.
	Rate Estimate
	// PerDecade is the change in each tenfold time, c ln 10 of y0 + c ln(1 + t/t0).
	PerDecade Estimate
	T0        float64 // s, of the same law
	// Tau is the time constant of yEnd + (y0 - yEnd) exp(-t/tau), s; unknown where
	// the record is too short to show an end.
	Tau  Estimate
	YEnd float64
	// RSS of each law: constant, straight line, logarithm, exponential.
	RSS [4]float64
}

const (
	lawConstant = iota
	lawLine
	lawLog
	lawExp
)

// FitHold tells creep from a leak. Every law is fitted by least squares, the
// time constants searched over; a law costs ln n / 2 for each of its parameters in
// log likelihood (BIC / 2), n being how many independent values the record is
// worth, and must be ahead of the best law of another kind by 3, which is strong
// evidence (Kass and Raftery, JASA 90 (1995) 773-795). t counts from the start
// of the hold. Needs five values. Errors as FitLine.
func FitHold(t, y []float64) (Hold, error) {
	line, err := fitSerial(t, y)
	if err != nil {
		return Hold{}, err
	}
	if len(t) < 5 {
		return Hold{}, fmt.Errorf("fit a hold: %d values where 5 are needed: %w", len(t), ErrTooFew)
	}
	from := Quantile(t, 0)
	span := Quantile(t, 1) - from
	h := Hold{Rate: Estimate{Value: line.B, Random: math.Sqrt(line.VarB), DoF: line.DoF, Method: "straight line"}}
	since := make([]float64, len(t))
	for i := range t {
		since[i] = t[i] - from
	}
	creep := searchShape(since, y, span/1000, span/2, logShape)
	leak := searchShape(since, y, span/100, 30*span, expShape)
	_, sd := Mean(y)
	h.RSS = [4]float64{
		sd * sd * float64(len(y)-1), sumSquares(residuals(t, y, line.A, line.B)), creep.rss, leak.rss,
	}
	h.T0 = creep.time
	h.PerDecade = creep.figure("logarithm of time", func(c []float64) (float64, []float64) {
		return c[1] * math.Ln10, []float64{0, math.Ln10, 0}
	})
	h.YEnd = leak.a
	h.Tau = leak.figure("exponential", func([]float64) (float64, []float64) { return leak.time, []float64{0, 0, 1} })
	if !(h.Tau.Random < h.Tau.Value/2) {
		h.Tau = Unknown("the record is too short to show where it ends")
	}
	h.Kind = h.kind(y, leak.rest, creep.rest)
	return h, nil
}

// kind compares the laws.
func (h Hold) kind(y, leakRest, creepRest []float64) HoldKind {
	const strong, rounding = 3.0, 1e-9
	n := math.Max(3, float64(len(y))/math.Min(Dependence(leakRest), Dependence(creepRest)))
	least := rounding * (Quantile(y, 1) - Quantile(y, 0))
	least = math.Max(least*least*float64(len(y)), math.SmallestNonzeroFloat64)
	cost := func(law, parameters int) float64 {
		return n/2*math.Log(math.Max(h.RSS[law], least)) + float64(parameters)/2*math.Log(n)
	}
	costs := map[HoldKind]float64{
		HoldStill: cost(lawConstant, 1),
		HoldLeak:  math.Min(cost(lawLine, 2), cost(lawExp, 3)),
		HoldCreep: cost(lawLog, 3),
	}
	for _, k := range []HoldKind{HoldStill, HoldLeak, HoldCreep} {
		ahead := math.Inf(1)
		for other, c := range costs {
			if other != k {
				ahead = math.Min(ahead, c-costs[k])
			}
		}
		// Nothing is simpler than standing still: it need only not be beaten.
		if ahead > strong || k == HoldStill && ahead > 0 {
			return k
		}
	}
	return HoldUnsettled
}

// shape is how a law goes with time at its time constant, and by how much that
// changes with the constant.
type shape func(t, constant float64) (value, byConstant float64)

func logShape(t, t0 float64) (value, byConstant float64) {
	return math.Log1p(t / t0), -t / (t0 * (t0 + t))
}

func expShape(t, tau float64) (value, byConstant float64) {
	e := math.Exp(-t / tau)
	return e, t / (tau * tau) * e
}

// shaped is y = a + b shape(t).
type shaped struct {
	a, b, time, rss float64
	rest            []float64
	slopes          [][]float64 // of y by a, b and the time constant
}

// searchShape looks for the time constant between two limits, evenly in its
// logarithm and then finer.
func searchShape(t, y []float64, shortest, longest float64, of shape) shaped {
	const grid = 60
	best := shaped{rss: math.Inf(1)}
	step := math.Pow(longest/shortest, 1.0/grid)
	for k := range grid + 1 {
		best = best.orBetter(t, y, shortest*math.Pow(step, float64(k)), of)
	}
	for ; step > 1+1e-13; step = math.Sqrt(step) {
		for moved := true; moved; {
			was := best.time
			best = best.orBetter(t, y, math.Min(was*step, longest), of)
			best = best.orBetter(t, y, math.Max(was/step, shortest), of)
			moved = best.time != was
		}
	}
	return best
}

func (s shaped) orBetter(t, y []float64, constant float64, of shape) shaped {
	next := shaped{time: constant}
	g, by := make([]float64, len(t)), make([]float64, len(t))
	for i := range t {
		g[i], by[i] = of(t[i], constant)
	}
	l, err := FitLine(g, y)
	if err != nil {
		return s
	}
	next.a, next.b, next.rest = l.A, l.B, residuals(g, y, l.A, l.B)
	if next.rss = sumSquares(next.rest); next.rss >= s.rss {
		return s
	}
	for i := range by {
		by[i] *= l.B
	}
	next.slopes = [][]float64{ones(len(t)), g, by}
	return next
}

// figure is a number made of the coefficients, by its gradient; serial
// dependence is allowed for.
func (s shaped) figure(method string, of func(c []float64) (value float64, gradient []float64)) Estimate {
	if s.slopes == nil {
		return Unknown("the record does not vary")
	}
	value, gradient := of([]float64{s.a, s.b, s.time})
	tau := Dependence(s.rest)
	dof := math.Max(1, float64(len(s.rest))/tau-3)
	x := mat.NewDense(len(s.rest), 3, nil)
	for j, c := range s.slopes {
		x.SetCol(j, c)
	}
	var qr mat.QR
	qr.Factorize(x)
	e := Estimate{Value: value, DoF: dof, Method: method, Random: math.Inf(1)}
	// The norm of R^-T g is the figure's share of the residual SD.
	var r mat.Dense
	qr.RTo(&r)
	upper := mat.NewTriDense(3, mat.Upper, nil)
	for i := range 3 {
		for j := i; j < 3; j++ {
			upper.SetTri(i, j, r.At(i, j))
		}
	}
	var half mat.VecDense
	if half.SolveVec(upper.T(), mat.NewVecDense(3, gradient)) == nil {
		e.Random = mat.Norm(&half, 2) * math.Sqrt(s.rss/math.Max(1, float64(len(s.rest)-3))*tau)
	}
	return e
}
