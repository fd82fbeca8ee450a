package gauge

import (
	"math"

	"tautramp/analyze/estimate"
)

// ForceFigures are what force-proving instruments are judged by, worked out in
// the same manner for any instrument: ISO 376:2011 clause 7 and ASTM E74. Their
// formulas and limits are from memory; creep, the rotation of the instrument
// and the uncertainty of the calibration force are not asked, so the class is no
// classification by the standard.
type ForceFigures struct {
	Points []ForcePoint
	// The largest of all points, %; unknown where the plan did not ask for it.
	Reproducibility estimate.Estimate // b: between mountings, rising
	Repeatability   estimate.Estimate // b': rising twice in one mounting
	Interpolation   estimate.Estimate // fc: mean of the mountings against the fitted curve
	ZeroReturn      estimate.Estimate // f0: of the deflection at the highest point
	Reversibility   estimate.Estimate // v: falling against rising, mean of the mountings
	Class           string            // "00", "0.5", "1", "2", "none" where it keeps none, "" where a term is unknown
	LowerLimitSI    float64           // ASTM E74: 2.4 times the scatter about the curve; 0 where none was fitted
	ClassAA, ClassA float64           // SI: from where on the range would be verified so
}

// ForcePoint is one point, in % of its own deflection; NaN: not known.
type ForcePoint struct {
	NominalSI                                                    float64
	Reproducibility, Repeatability, Interpolation, Reversibility float64
}

// mounting is what one mounting read at a point: deflections, zero taken off.
type mounting struct{ rising, falling []float64 }

// forcePoint works out the terms of one point; fitted is the curve's deflection
// there, NaN where there is none.
func forcePoint(mounted []mounting, fitted float64) ForcePoint {
	nan := math.NaN()
	p := ForcePoint{Reproducibility: nan, Repeatability: nan, Interpolation: nan, Reversibility: nan}
	var first, reversal []float64
	for _, m := range mounted {
		if len(m.rising) == 0 {
			continue
		}
		first = append(first, m.rising[0])
		if len(m.rising) > 1 && math.IsNaN(p.Repeatability) {
			mean := (m.rising[0] + m.rising[1]) / 2
			p.Repeatability = 100 * math.Abs(m.rising[1]-m.rising[0]) / math.Abs(mean)
		}
		for i := range min(len(m.rising), len(m.falling)) {
			reversal = append(reversal, 100*math.Abs(m.falling[i]-m.rising[i])/math.Abs(m.rising[i]))
		}
	}
	mean, _ := estimate.Mean(first)
	if len(first) > 1 {
		p.Reproducibility = 100 * spreadOf(first) / math.Abs(mean)
	}
	if len(reversal) > 0 {
		p.Reversibility, _ = estimate.Mean(reversal)
	}
	p.Interpolation = 100 * (mean - fitted) / math.Abs(fitted)
	return p
}

// nearNought is the share of the span below which a deflection is too small to
// be a whole of which percents are taken.
const nearNought = 0.02

func (w *work) forceFigures() {
	f := &w.res.Force
	curve := w.deflectionCurve()
	f.LowerLimitSI = w.e74(curve)
	f.ClassAA, f.ClassA = classAA*f.LowerLimitSI, classA*f.LowerLimitSI
	c := w.res.Curves[0]
	top := math.NaN()
	for _, a := range c.At {
		top = w.res.SpanSI
		if w.fromLow(a) < nearNought*w.res.SpanSI {
			continue
		}
		fitted := math.NaN()
		if curve.N > 0 {
			fitted, _ = curve.At(w.fromLow(a))
		}
		p := forcePoint(w.mounted(a), fitted)
		p.NominalSI = a.Nominal.SI
		f.Points = append(f.Points, p)
	}
	f.Reproducibility = w.worstForce("mounted once", func(p ForcePoint) float64 { return p.Reproducibility })
	f.Repeatability = w.worstForce("not risen twice in one mounting", func(p ForcePoint) float64 { return p.Repeatability })
	f.Interpolation = w.worstForce("too few points for a curve", func(p ForcePoint) float64 { return p.Interpolation })
	f.Reversibility = w.worstForce("not read both up and down", func(p ForcePoint) float64 { return p.Reversibility })
	f.ZeroReturn = w.res.ZeroShift
	if f.ZeroReturn.Known() {
		f.ZeroReturn = f.ZeroReturn.Scale(100 / top)
	}
	f.Class = forceClass(f.Reproducibility, f.Repeatability, f.Interpolation, f.ZeroReturn, f.Reversibility)
}

// fromLow is how far a point lies above the begin of the range.
func (w *work) fromLow(a At) float64 { return a.Nominal.SI - w.test.Plan.Low.SI }

// deflectionCurve is the deflection on the nominal value, all rising readings:
// a curve of the third degree at most (ISO 376), of the second where points are
// few.
func (w *work) deflectionCurve() estimate.Polynomial {
	x, y := w.deflections()
	degree := 2
	if len(w.res.Curves[0].At) >= 8 {
		degree = 3
	}
	if len(w.res.Curves[0].At) < degree+2 {
		return estimate.Polynomial{}
	}
	p, err := estimate.FitPolynomial(x, y, degree)
	if err != nil {
		return estimate.Polynomial{}
	}
	return p
}

// deflections are all rising readings above the begin of the range.
func (w *work) deflections() (x, y []float64) {
	for _, a := range w.res.Curves[0].At {
		for _, m := range w.mounted(a) {
			for _, d := range m.rising {
				x, y = append(x, w.fromLow(a)), append(y, d)
			}
		}
	}
	return x, y
}

// e74 is the lower limit factor of the readings about their curve.
func (w *work) e74(curve estimate.Polynomial) float64 {
	if curve.N == 0 {
		return 0
	}
	x, y := w.deflections()
	for i := range y {
		at, _ := curve.At(x[i])
		y[i] -= at
	}
	_, factor := lowerLimit(y, len(curve.Coef)-1)
	return factor
}

// mounted sorts a point's readings by mounting.
func (w *work) mounted(a At) []mounting {
	g := w.group(w.res.Curves[0].Series, a.Index)
	out := make([]mounting, g.runs())
	for _, o := range g.all {
		d := w.fromLow(a) + o.errSI
		if !math.IsNaN(o.zeroSI) {
			d -= o.zeroSI
		}
		if m := &out[o.Run]; o.Direction == Down {
			m.falling = append(m.falling, d)
		} else {
			m.rising = append(m.rising, d)
		}
	}
	return out
}

// worstForce is the largest size of a term, with the doubt that scatter gives a
// difference of two readings there.
func (w *work) worstForce(why string, of func(ForcePoint) float64) estimate.Estimate {
	most := estimate.Unknown(why)
	for _, p := range w.res.Force.Points {
		v := math.Abs(of(p))
		if math.IsNaN(v) || most.Known() && v <= most.Value {
			continue
		}
		scatter := w.res.Curves[0].Scatter
		most = estimate.Estimate{Value: v, DoF: math.Inf(1), Method: "largest over the points, % of the deflection"}
		most.Random, most.DoF = scatterOf(scatter, 2*1e4/(p.NominalSI-w.test.Plan.Low.SI)/(p.NominalSI-w.test.Plan.Low.SI))
	}
	return most
}

// forceClass is the best class that keeps all terms: ISO 376:2011 Table 2, from
// memory.
func forceClass(terms ...estimate.Estimate) string {
	for _, t := range terms {
		if !t.Known() {
			return ""
		}
	}
	for _, c := range forceClasses() {
		keeps := true
		for i, t := range terms {
			keeps = keeps && math.Abs(t.Value) <= c.percent[i]
		}
		if keeps {
			return c.name
		}
	}
	return "none"
}

type forceLimits struct {
	name    string
	percent [5]float64 // b, b', fc, f0, v
}

func forceClasses() []forceLimits {
	return []forceLimits{
		{"00", [5]float64{0.05, 0.025, 0.025, 0.012, 0.07}},
		{"0.5", [5]float64{0.1, 0.05, 0.05, 0.025, 0.15}},
		{"1", [5]float64{0.2, 0.1, 0.1, 0.05, 0.3}},
		{"2", [5]float64{0.4, 0.2, 0.2, 0.1, 0.5}},
	}
}

// A verified range begins at so many times the lower limit factor (ASTM E74,
// from memory).
const (
	llfFactor = 2.4
	classAA   = 2000
	classA    = 400
)

// lowerLimit is the standard deviation of readings about a curve of a degree,
// and 2.4 times it.
func lowerLimit(deviations []float64, degree int) (s, factor float64) {
	sum := 0.0
	for _, d := range deviations {
		sum += d * d
	}
	s = math.Sqrt(sum / float64(len(deviations)-degree-1))
	return s, llfFactor * s
}
