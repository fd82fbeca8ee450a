package report

import (
	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// cardRule is the rule of direction, in capitals on the card.
func cardRule(d analyze.Direction) string {
	if d == analyze.Falling {
		return "Come down to it from above and stop on it"
	}
	return "Come up to it from below and stop on it"
}

func heldBy(r *analyze.Result, h mill.Hold) string {
	switch {
	case r.Setup.Tensioner.SetBy != mill.SetByPressure:
		return "the screw"
	case h == mill.HoldLocked:
		return "a valve that locks the oil in"
	}
	return "pressure that is kept up"
}

// cardDoubts is what whoever reads the card must know of how it was made.
func cardDoubts(r *analyze.Result, o CardOrder) []string {
	var doubts []string
	add := func(when bool, text string) {
		if when {
			doubts = append(doubts, text)
		}
	}
	add(len(fittedCycles(r)) < 2, "One ramp only: how well the next setting repeats is not known.")
	add(len(o.Others) > 0, "Bands that were not measured: the same weight moved was confirmed, not checked.")
	doubts = append(doubts, wornText(r.Setup.Band))
	add(r.Setup.Rig.Faces != 2, "Stretch was measured on one face only.")
	add(o.Proof == nil, "Not checked by a fresh approach.")
	add(o.Proof != nil && o.Proof.Agreement == analyze.Agrees, "A fresh approach agreed.")
	add(o.Proof != nil && o.Proof.Agreement == analyze.Undecided, "A fresh approach decided nothing.")
	for _, i := range r.Setup.Overdue {
		doubts = append(doubts, "The check of "+clean(named(i.Name, "an instrument"), nameLength)+" was overdue.")
	}
	for _, w := range r.Warnings {
		add(w.Code == "instrument-uncorrected", "Instruments not corrected on the bench.")
		add(w.Code == "instrument-failed" || w.Code == "instrument-undecided", clean(w.Text, textLength))
	}
	add(r.Grade == analyze.Service, "The tensioner asks for service: its friction takes more than it should.")
	add(r.Grade == analyze.Inconclusive, "The friction could not be graded.")
	return doubts
}

func fittedCycles(r *analyze.Result) []analyze.Cycle {
	var fitted []analyze.Cycle
	for _, c := range r.Cycles {
		if c.Role == analyze.Ramp && c.Rising.Points > 0 {
			fitted = append(fitted, c)
		}
	}
	return fitted
}

// cardVoid is what makes a card void. Common practice, no source.
func cardVoid() []string {
	return []string{"other oil or grease", "another gauge", "another spring", "a band of other thickness or width, or worn narrower", "work on the tensioner, wheels or slides", "a reading that no longer agrees after a run"}
}

// cardCautions are the cautions of whoever sets by the card.
func cardCautions() []string {
	return []string{
		"The maker's manual, local codes, site rules and qualified persons come before this card.",
		"Lock out before hands go near band or wheels. Stay out of the band's plane.",
		"If the setting rises and the band does not tighten, stop and release slowly.",
	}
}
