package report

import (
	"math"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// dialFigure is a reading of the mill's own dial: whole graduations, and an
// interval wide enough for what was rounded.
func dialFigure(reading estimate.Estimate, d analyze.Dial) figure {
	name := "on " + named(d.Name, "the mill's own dial")
	if d.Unit != mill.Divisions {
		name = d.Unit + " " + name
	}
	u := unit{name: clean(name, nameLength), factor: 1}
	f := figureOf(reading, u)
	if d.Graduation > 0 {
		f.Value = plain(reading.Value, max(1, digitsTo(reading.Value, d.Graduation)))
	}
	return f
}

// digitsTo is how many significant digits a value has down to a step.
func digitsTo(value, step float64) int {
	text := plain(step, 3)
	decimals := 0
	if dot := strings.IndexByte(text, '.'); dot >= 0 {
		decimals = len(text) - dot - 1
	}
	whole := 1
	if a := math.Abs(value); a >= 1 {
		whole = int(math.Floor(math.Log10(a))) + 1
	}
	return whole + decimals
}

// readOn says on what the number is to be read.
func readOn(r *analyze.Result, d analyze.Direction) string {
	at := r.Dial.AtRising
	if d == analyze.Falling {
		at = r.Dial.AtFalling
	}
	if !at.Reading.Known() {
		return "the transducer only: " + strings.TrimPrefix(unknownWhy(at.Reading), "transducer only: ")
	}
	return named(r.Dial.Name, "the mill's own dial") + ", to its graduation; the limit is the maker's, not the dial's reading of it"
}

// readAt is a setting to go to, on the mill's own dial where that was compared
// there, else on the transducer, in both systems.
func readAt(d analyze.Dial, way analyze.Direction, e estimate.Estimate, u, v units) string {
	if onDial := d.Read(way, e); onDial.Reading.Known() {
		return dialFigure(onDial.Reading, d).short()
	}
	text := figureOf(e, u.setting).short() + " (" + figureOf(e, v.setting).short() + ")"
	if d.Rising.Line.N > 0 || d.Falling.Line.N > 0 { // the other number of the card is on the dial
		text += " on the transducer"
	}
	return text
}
