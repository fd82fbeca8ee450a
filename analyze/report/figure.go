package report

import (
	"tautramp/analyze/estimate"
)

// figure is an estimate made ready to print: rounded after JCGM 100:2008,
// 7.2.6, the half-width of its 95 % interval to two significant digits and the
// value to match. An unknown one has only Why.
type figure struct {
	Value     string // "724"
	PlusMinus string // "48"; "" where no finite interval exists
	Low, High string // ends of the 95 % interval
	Unit      string
	Why       string // why it is not known; "" when it is
}

// figureOf rounds an estimate in a display unit.
func figureOf(e estimate.Estimate, u unit) figure {
	low, high := e.Interval95()
	return figureBetween(e, low, high, u)
}

// figureRead is figureOf for what is read on an instrument of a least count: of
// the two digits, none is kept that the instrument does not show, but always one
// (JCGM 100 7.2.6 asks for at most two).
func figureRead(e estimate.Estimate, u unit, countSI float64) figure {
	low, high := e.Interval95()
	f := figureBetween(e, low, high, u)
	half, count := (u.show(high)-u.show(low))/2, u.show(countSI)
	if f.PlusMinus == "" || !(count > 0) || !finite(count) {
		return f
	}
	two := uncertaintyDecimals(half)
	if decimals := max(two-1, min(two, uncertaintyDecimals(count)-1)); decimals != two {
		number := func(x float64) string { return grouped(fixed(x, decimals)) }
		f.Value, f.PlusMinus, f.Low, f.High = number(u.show(e.Value)), number(half), number(u.show(low)), number(u.show(high))
	}
	return f
}

func figureBetween(e estimate.Estimate, lowSI, highSI float64, u unit) figure {
	if why := unknownWhy(e); why != "" {
		return figure{Unit: u.name, Why: why}
	}
	half := (u.show(highSI) - u.show(lowSI)) / 2
	if !finite(half) || half <= 0 {
		return figure{Value: plain(u.show(e.Value), 4), Unit: u.name}
	}
	decimals := uncertaintyDecimals(half)
	number := func(x float64) string { return grouped(fixed(x, decimals)) }
	return figure{
		Value: number(u.show(e.Value)), PlusMinus: number(half),
		Low: number(u.show(lowSI)), High: number(u.show(highSI)), Unit: u.name,
	}
}

// unknownWhy says why an estimate cannot be printed, or "".
func unknownWhy(e estimate.Estimate) string {
	switch {
	case !e.Known() && e.Why == "":
		return "no reason was given"
	case !e.Known():
		return clean(e.Why, textLength)
	case !finite(e.Value):
		return "the computation gave no finite number"
	}
	return ""
}

// String is the figure in one line: "724 +/- 48 gauge psi".
func (f figure) String() string {
	if f.Why != "" {
		return notKnown + ": " + f.Why
	}
	text := unit{name: f.Unit}.with(f.Value)
	switch {
	case f.PlusMinus == "":
		return text + " (interval not known)"
	case f.Unit == "":
		return f.Value + " +/- " + f.PlusMinus
	}
	return f.Value + " +/- " + f.PlusMinus + " " + f.Unit
}

// short is the value with its unit, or why there is none.
func (f figure) short() string {
	if f.Why != "" {
		return notKnown + ": " + f.Why
	}
	return unit{name: f.Unit}.with(f.Value)
}
