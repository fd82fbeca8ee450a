package mill

import (
	"fmt"
	"strings"
)

// Divisions is the unit of a dial whose scale has bare numbers.
const Divisions = "divisions"

func readDialFace(t *table, of Tensioner) *DialFace {
	defer t.rest()
	d := &DialFace{
		Name:       t.text("name"),
		Unit:       t.need("unit", "write what stands on the dial, such as psi or bar, or divisions for bare numbers"),
		Graduation: t.number("graduation", 1e-6, 1e6),
	}
	if !t.has("graduation") {
		t.faults.add(t.at("graduation"), "write the step from mark to mark, in the dial's unit", missing)
	}
	if d.Unit == "" || of.SetBy == "" {
		return d
	}
	unit, ok := dialUnit(d.Unit, of)
	if !ok {
		t.faults.add(t.at("unit"), "known here: divisions, "+unitNames([]Dim{of.SettingDim()}), "%q is no unit of what this tensioner is set by", d.Unit)
		return d
	}
	d.Unit = unit
	return d
}

// dialUnit is the printed name of a unit that a tensioner's dial may have.
func dialUnit(text string, of Tensioner) (string, bool) {
	switch alias(text) {
	case Divisions, "division", "div":
		return Divisions, true
	}
	u, ok := findUnit(text)
	return u.Name, ok && u.Dim == of.SettingDim()
}

// DialReading is what somebody read on a mill's own dial.
type DialReading struct {
	Value float64
	Unit  string // printed name, or Divisions
}

// SIUnit is the reading's unit; ok is false for bare divisions.
func (r DialReading) SIUnit() (u Unit, ok bool) { return findUnit(r.Unit) }

// ParseDialReading reads "600 psi", "12.5 div", or "600" where the profile says
// what the dial shows. The error is a *QuantityError.
func (t Tensioner) ParseDialReading(text string) (DialReading, error) {
	number, unitName := splitUnit(plainFractions(strings.TrimSpace(text)))
	value, ok := parseNumber(number)
	refuse := func(problem, hint string) (DialReading, error) {
		return DialReading{}, &QuantityError{Text: text, Problem: problem, Hint: hint}
	}
	if !ok {
		return refuse("not a number", "write what the dial shows, such as 600 psi")
	}
	if unitName == "" {
		if t.Dial == nil {
			return refuse("no unit", "write the dial's unit after the number, or div where its numbers are bare")
		}
		return DialReading{value, t.Dial.Unit}, nil
	}
	unit, ok := dialUnit(unitName, t)
	switch {
	case !ok:
		return refuse(fmt.Sprintf("%q is no unit of what %s is set by", unitName, t.Name), "known here: div, "+unitNames([]Dim{t.SettingDim()}))
	case t.Dial != nil && unit != t.Dial.Unit:
		return refuse(fmt.Sprintf("the dial shows %s, not %s", t.Dial.Unit, unit), "write what the dial shows")
	}
	return DialReading{value, unit}, nil
}
