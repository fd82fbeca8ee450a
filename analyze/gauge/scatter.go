package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// fewRepeats is the least number of degrees of freedom at which like readings
// alone say how a reading scatters; below it the smoothness of the curve is
// asked too. Judgement.
const fewRepeats = 5

// scatter is the standard deviation of one reading of a series: of like
// readings, pooled over all points, or where there are too few of them, of the
// readings about a smooth curve. Random is not used; DoF is that of the value.
func (w *work) scatter(s Series) estimate.Estimate {
	like := w.likeScatter(s)
	if like.Known() && like.DoF >= fewRepeats {
		return like
	}
	smooth := w.smoothScatter(s)
	if !smooth.Known() || like.Known() && like.DoF >= smooth.DoF {
		return like
	}
	return smooth
}

// likeScatter pools the variances of readings at one point, in one direction
// and mounting.
func (w *work) likeScatter(s Series) estimate.Estimate {
	sum, dof := 0.0, 0.0
	for i := range w.test.Plan.Points {
		for run := range w.test.Plan.Runs {
			for _, d := range []Direction{Up, Down} {
				v := w.errors(func(o observation) bool {
					return o.Series == s && o.Index == i && o.Direction == d && o.Run == run
				})
				if n := float64(len(v)); n > 1 {
					_, sd := estimate.Mean(v)
					sum, dof = sum+sd*sd*(n-1), dof+n-1
				}
			}
		}
	}
	if dof == 0 {
		return estimate.Unknown("no point was read twice in the same way")
	}
	return estimate.Estimate{Value: math.Sqrt(sum / dof), DoF: dof, Method: "like readings, pooled over the points"}
}

// smoothScatter takes each inner point against the chord of its neighbours on
// the same way: what a smooth curve leaves is scatter, and a bend between
// neighbours counts as scatter too, to the cautious side. The degrees of freedom
// are Satterthwaite's for a quadratic form, for neighbouring chords share
// readings.
func (w *work) smoothScatter(s Series) estimate.Estimate {
	sum, n, squares := 0.0, 0.0, 0.0
	for run := range w.test.Plan.Runs {
		for repeat := range w.test.Plan.Repeats {
			for _, d := range []Direction{Up, Down} {
				x, y := w.leg(s, run, repeat, d)
				rows := chords(x)
				for i, r := range rows {
					e := r.of(y)
					sum, n = sum+e*e, n+1
					for _, other := range rows[max(0, i-2):min(len(rows), i+3)] {
						shared := r.times(other)
						squares += shared * shared
					}
				}
			}
		}
	}
	if n == 0 {
		return estimate.Unknown("fewer than three points on one way")
	}
	return estimate.Estimate{Value: math.Sqrt(sum / n), DoF: n * n / squares, Method: "readings about a smooth curve"}
}

// leg is one way of a repeat in the order of the scale.
func (w *work) leg(s Series, run, repeat int, d Direction) (x, y []float64) {
	for i := range w.test.Plan.Points {
		for _, o := range w.seen {
			if o.Index == i && o.Series == s && o.Run == run && o.Repeat == repeat && o.Direction == d {
				x, y = append(x, o.Nominal.SI), append(y, o.errSI)
				break
			}
		}
	}
	return x, y
}

// chord is an inner point less the chord of its neighbours, of unit variance.
type chord struct {
	first  int
	weight [3]float64
}

func chords(x []float64) []chord {
	var rows []chord
	for i := 1; i+1 < len(x); i++ {
		right := (x[i] - x[i-1]) / (x[i+1] - x[i-1])
		size := math.Sqrt(1 + right*right + (1-right)*(1-right))
		rows = append(rows, chord{i - 1, [3]float64{-(1 - right) / size, 1 / size, -right / size}})
	}
	return rows
}

func (c chord) of(y []float64) float64 {
	return c.weight[0]*y[c.first] + c.weight[1]*y[c.first+1] + c.weight[2]*y[c.first+2]
}

// times is the covariance of two chords of like readings.
func (c chord) times(o chord) float64 {
	sum := 0.0
	for i, v := range c.weight {
		if k := c.first + i - o.first; k >= 0 && k < len(o.weight) {
			sum += v * o.weight[k]
		}
	}
	return sum
}

// errors are those of the observations that are wanted, in their order.
func (w *work) errors(wanted func(observation) bool) []float64 {
	var v []float64
	for _, o := range w.seen {
		if wanted(o) {
			v = append(v, o.errSI)
		}
	}
	return v
}
