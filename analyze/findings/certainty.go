package findings

// leastCertain is below what nothing is named.
const leastCertain = 0.5

// priorOdds is for a cause against its absence, before anything is measured: one
// rig in twenty has it. The mix is stated, not found: see METHOD.md.
const priorOdds = 0.05

// posterior is the probability of a cause from that of its tests, which takes
// every value of a figure as equally likely beforehand.
func posterior(tests float64) float64 {
	if tests >= 1 {
		return 1
	}
	odds := priorOdds * tests / (1 - tests)
	return odds / (1 + odds)
}

func wordOf(certainty float64) Word {
	switch {
	case certainty >= 0.95:
		return High
	case certainty >= 0.85:
		return Likely
	}
	return Possible
}
