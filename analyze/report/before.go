package report

import (
	"fmt"

	"tautramp/analyze"
	"tautramp/analyze/findings"
)

// changeText is one figure found and left, in words.
type changeText struct{ Name, Found, Left, Change, Says string }

// beforeSheet is the comparison in words; nothing where none was asked for.
type beforeSheet struct {
	Asked bool
	File  string
	List  []changeText
	Notes []string
}

func beforeOf(c *findings.Comparison, file string, u units) beforeSheet {
	if c == nil {
		return beforeSheet{}
	}
	s := beforeSheet{Asked: true, File: clean(file, nameLength)}
	if c.Same {
		s.Notes = append(s.Notes, "Band, rig and instruments are the same: what repeats cancels, and the change rests on scatter.")
	}
	s.Notes = append(s.Notes, c.Notes...)
	for _, x := range c.Changes {
		s.List = append(s.List, changeOf(x, u))
	}
	return s
}

func changeOf(x findings.Change, u units) changeText {
	in := percent()
	switch x.Role {
	case findings.ASetting:
		in = u.setting
	case findings.AForce:
		in = u.force
	}
	t := changeText{Name: x.Name, Found: figureOf(x.Before, in).short(), Left: figureOf(x.After, in).short(), Change: figureOf(x.By, in).String()}
	switch x.Word {
	case findings.NotCompared:
		t.Says = "cannot be compared"
	case findings.NoChange:
		t.Says = "no change that is told from none"
	default:
		t.Says = fmt.Sprintf("%s change", x.Word)
		if x.Chance < 0.001 {
			t.Says += ", below 1 in 1,000 by chance"
		} else {
			t.Says += fmt.Sprintf(", %s in 100 by chance", plain(100*x.Chance, 1))
		}
	}
	return t
}

// before writes the comparison for a terminal.
func (p *printer) before(s beforeSheet) {
	if !s.Asked {
		return
	}
	p.heading("Found and left")
	if s.File != "" {
		p.para(2, "Found: "+s.File+".")
	}
	for _, c := range s.List {
		p.para(2, c.Name+": "+c.Says)
		p.facts([]fact{{"found", c.Found}, {"left", c.Left}, {"change", c.Change}})
	}
	for _, n := range s.Notes {
		p.para(2, n)
	}
}

func beforeJSON(c *findings.Comparison, r *analyze.Result, by setBy) any {
	if c == nil {
		return nil
	}
	return object{
		{"same_instruments", c.Same}, {"notes", texts(c.Notes)},
		{"changes", each(c.Changes, func(x findings.Change) object {
			word := string(x.Word)
			if word == "" {
				word = "not compared"
			}
			return object{
				{"name", clean(x.Name, nameLength)}, {"quantity", string(x.Role)}, {"unit", changeUnit(x.Role, by)},
				{"found", estimateJSON(x.Before)}, {"left", estimateJSON(x.After)}, {"change", estimateJSON(x.By)},
				{"chance", number(x.Chance)}, {"significance", word},
			}
		})},
	}
}

func changeUnit(q findings.Quantity, by setBy) string {
	switch q {
	case findings.ASetting:
		return by.siUnit
	case findings.AForce:
		return "N"
	}
	return "1"
}
