package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// WidthAt is the half-width of the loop at one stress.
type WidthAt struct {
	StressPa float64           // NaN where the zero is unknown
	RisingSI float64           // setting on the rising branch at that stretch
	HalfSI   estimate.Estimate // setting units
	Hidden   bool              // not distinguishable from the indicator: its interval holds none at all
	Budget   []Term            // of HalfSI, of the working setting only
}

// Grade is the verdict on the half-width at the working setting.
type Grade string

// The grades. The zero value is inconclusive.
const (
	Inconclusive Grade = ""
	Good         Grade = "good"
	Watch        Grade = "watch"
	Service      Grade = "service"
	Indistinct   Grade = "not distinguishable from the indicator"
)

// Below the first share of the working setting a half-width is good, above the
// second it asks for service. Judgement.
const (
	goodBelow    = 0.03
	serviceAbove = 0.06
)

const widthRows = 9

// halfWidth is half the difference of the two settings at one extension: that
// which the rising line has at the setting given. Both branches of one cycle
// share their zero, so it drops out.
func halfWidth(risingSI float64) figure {
	return func(r ramp, _ constants) float64 {
		e := r.rising.A + r.rising.B*risingSI
		falling := (e - r.falling.A) / r.falling.B
		if r.opposed {
			falling = -falling
		}
		return (risingSI - falling) / 2
	}
}

// widths tells the half-width along the loop, and grades it at the working
// setting: the target's, or the highest on both branches where that is not
// known.
func (w *work) widths() {
	low, high := w.common()
	for n := range widthRows {
		w.res.Widths = append(w.res.Widths, w.widthAt(low+(high-low)*float64(n)/(widthRows-1)))
	}
	working, what := high, "the highest setting on both branches"
	if w.zeroKnown() && w.setup.TargetPa > 0 {
		if p := w.settingAt(Rising, w.setup.TargetPa).SettingSI.Value; p >= low && p <= high {
			working, what = p, "the target's setting"
		}
	}
	w.res.Working = w.widthAt(working)
	w.res.Working.Budget = w.ownTerms(w.res.Working.HalfSI, halfWidth(working))
	w.res.WidthRatio = w.reaching(Rising, at(working)).combine(func(r ramp, k constants) float64 {
		return halfWidth(working)(r, k) / working
	}, "not a finite number")
	if w.res.WidthRatio.Known() {
		w.res.WidthRatio.Method += ", at " + what
	}
	w.grade()
}

func (w *work) widthAt(risingSI float64) WidthAt {
	row := WidthAt{StressPa: math.NaN(), RisingSI: risingSI}
	row.HalfSI = w.reaching(Rising, at(risingSI)).combine(halfWidth(risingSI), "not a finite number")
	lo, hi := row.HalfSI.Interval95()
	row.Hidden = lo <= 0 && hi >= 0
	if w.zeroKnown() {
		row.StressPa = w.stressAt(Rising, risingSI).Value
	}
	return row
}

// common is the range of rising settings whose extension was captured on the
// falling branch too.
func (w *work) common() (low, high float64) {
	across := func(fallingSI float64) float64 {
		return w.combine(func(r ramp, _ constants) float64 {
			e := r.falling.A + r.falling.B*fallingSI
			return (e - r.rising.A) / r.rising.B
		}, "").Value
	}
	low = math.Max(w.res.Rising.LowSI, across(w.res.Falling.LowSI))
	high = math.Min(w.res.Rising.HighSI, across(w.res.Falling.HighSI))
	return low, math.Max(low, high)
}

// grade gives a verdict only where the whole 95 % interval lies on one side of
// both limits.
func (w *work) grade() {
	switch w.setup.Tensioner.SetBy {
	case mill.SetByTorque: // by its efficiency: see gradeScrew
		return
	case mill.SetByTurns:
		w.warn("no-grade", "A tensioner set by turns is not graded: play and friction are not told apart in its loop.")
		return
	}
	lo, hi := w.res.WidthRatio.Interval95()
	if w.turnedLoop() {
		lo, hi = -hi, -lo
	}
	if w.res.Working.Hidden {
		w.res.Grade = Indistinct
		return
	}
	low, high := gradeOf(lo), gradeOf(hi)
	if low == high {
		w.res.Grade = low
		return
	}
	w.warn("no-grade", fmt.Sprintf("The half-width of the loop is not known well enough to grade: it may be anything from %q to %q.", low, high))
}

func gradeOf(ratio float64) Grade {
	switch {
	case math.IsNaN(ratio):
		return Inconclusive
	case ratio < goodBelow:
		return Good
	case ratio <= serviceAbove:
		return Watch
	}
	return Service
}
