package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// group is all observations of one point in one series.
type group struct{ all []observation }

func (w *work) group(s Series, index int) group {
	var g group
	for _, o := range w.seen {
		if o.Series == s && o.Index == index {
			g.all = append(g.all, o)
		}
	}
	return g
}

func refOf(o observation) float64 { return o.refSI }
func indOf(o observation) float64 { return o.indSI }
func stdOf(o observation) float64 { return o.refStd }

func (g group) mean(of func(observation) float64) float64 {
	sum := 0.0
	for _, o := range g.all {
		sum += of(o)
	}
	return sum / float64(len(g.all))
}

// from are the errors on one way.
func (g group) from(d Direction) []float64 {
	var v []float64
	for _, o := range g.all {
		if o.Direction == d {
			v = append(v, o.errSI)
		}
	}
	return v
}

// one is the error on one way.
func (g group) one(d Direction, lines []Term, scatter estimate.Estimate) estimate.Estimate {
	v := g.from(d)
	if len(v) == 0 {
		return estimate.Unknown("not read " + string(d))
	}
	e := estimate.Estimate{System: sumOf(lines), Method: "mean of the readings " + string(d) + "; " + scatterMethod(scatter)}
	e.Value, _ = estimate.Mean(v)
	e.Random, e.DoF = scatterOf(scatter, 1/float64(len(v)))
	return e
}

// scatterOf is the scatter of a figure whose variance is a share of one
// reading's.
func scatterOf(scatter estimate.Estimate, share float64) (std, dof float64) {
	if !scatter.Known() {
		return 0, math.Inf(1)
	}
	return scatter.Value * math.Sqrt(share), scatter.DoF
}

func scatterMethod(scatter estimate.Estimate) string {
	if !scatter.Known() {
		return "scatter not known: " + scatter.Why
	}
	return "scatter from " + scatter.Method
}

// both is the mean of both ways; that the instrument may have come from either
// side is a rectangular doubt of half their difference (cg-17).
func (g group) both(a At, lines []Term, scatter estimate.Estimate) (estimate.Estimate, []Term) {
	share := 1 / float64(len(g.from(Up)))
	e := estimate.Estimate{Value: a.Up.Value, Method: a.Up.Method}
	switch {
	case !a.Up.Known():
		e.Value, share = a.Down.Value, 1/float64(len(g.from(Down)))
	case a.Down.Known():
		e.Value = (a.Up.Value + a.Down.Value) / 2
		share = (1/float64(len(g.from(Up))) + 1/float64(len(g.from(Down)))) / 4
		e.Method = "mean of both ways; " + scatterMethod(scatter)
	}
	budget := append([]Term(nil), lines...)
	if a.UpDown.Known() {
		budget = append(budget, Term{"from which side it came", math.Abs(a.UpDown.Value) / 2 / math.Sqrt(3), math.Inf(1), "B", "falling less rising / (2 sqrt 3)"})
	}
	e.System = sumOf(budget)
	e.Random, e.DoF = scatterOf(scatter, share)
	budget = append(budget, Term{"repeatability", e.Random, e.DoF, "A", scatterMethod(scatter)})
	return e, budget
}

// upDown is the mean of falling less rising within each up and down. The
// reference and the zero are common to both.
func (w *work) upDown(g group, scatter estimate.Estimate) estimate.Estimate {
	v := g.pairs()
	if len(v) == 0 {
		return estimate.Unknown("not read both up and down")
	}
	e := estimate.Estimate{System: w.test.Instruments.TestedCountSI / math.Sqrt(6), Method: "falling less rising within each up and down"}
	e.Value, _ = estimate.Mean(v)
	e.Random, e.DoF = scatterOf(scatter, 2/float64(len(v)))
	return e
}

// pairs are falling less rising of each repeat.
func (g group) pairs() []float64 {
	var v []float64
	for _, up := range g.all {
		for _, down := range g.all {
			if up.Direction == Up && down.Direction == Down && up.Run == down.Run && up.Repeat == down.Repeat {
				v = append(v, down.errSI-up.errSI)
			}
		}
	}
	return v
}

// A range of two to five normal readings has a standard deviation between 0.85
// and 0.89 of theirs (the constant d3 of control charts).
const rangeSD = 0.87

// repeatability is the largest spread of readings in one direction and
// mounting.
func (g group) repeatability(scatter estimate.Estimate) estimate.Estimate {
	most, n := 0.0, 0
	for _, o := range g.all {
		var like []float64
		for _, p := range g.all {
			if p.Run == o.Run && p.Direction == o.Direction {
				like = append(like, p.errSI)
			}
		}
		if len(like) > 1 {
			most, n = math.Max(most, spreadOf(like)), n+1
		}
	}
	if n == 0 {
		return estimate.Unknown("read once on each way")
	}
	e := estimate.Estimate{Value: most, Method: "largest less smallest of like readings"}
	e.Random, e.DoF = scatterOf(scatter, rangeSD*rangeSD)
	return e
}

// reproducibility is the largest spread of the mountings' means on one way.
func (g group) reproducibility(scatter estimate.Estimate) estimate.Estimate {
	most, known := 0.0, false
	for _, d := range []Direction{Up, Down} {
		var means []float64
		for run := range g.runs() {
			var v []float64
			for _, o := range g.all {
				if o.Direction == d && o.Run == run {
					v = append(v, o.errSI)
				}
			}
			if len(v) > 0 {
				m, _ := estimate.Mean(v)
				means = append(means, m)
			}
		}
		if len(means) > 1 {
			most, known = math.Max(most, spreadOf(means)), true
		}
	}
	if !known {
		return estimate.Unknown("mounted once")
	}
	e := estimate.Estimate{Value: most, Method: "largest less smallest mean of the mountings"}
	e.Random, e.DoF = scatterOf(scatter, rangeSD*rangeSD)
	return e
}

func (g group) runs() int {
	n := 0
	for _, o := range g.all {
		n = max(n, o.Run+1)
	}
	return n
}

func spreadOf(v []float64) float64 { return estimate.Quantile(v, 1) - estimate.Quantile(v, 0) }
