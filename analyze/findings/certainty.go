package findings

// leastCertain is below what nothing is named.
const leastCertain = 0.5

// counted is what certainty is worth: how often findings of a mix of simulated
// rigs were right, by what was reckoned for them. A line that never falls, fitted on
// the seeds for tuning (METHOD.md).
func counted() [][2]float64 {
	return [][2]float64{{0, 0}, {0.02, 0.03}, {0.05, 0.15}, {0.1, 0.38}, {0.2, 0.62}, {0.3, 0.79},
		{0.36, 0.85}, {0.5, 0.91}, {0.66, 0.95}, {0.85, 0.965}, {0.95, 0.975}, {0.99, 0.985}, {1, 0.99}}
}

// calibrated is the certainty that counting gives what was reckoned.
func calibrated(reckoned float64) float64 {
	line := counted()
	for k := 1; k < len(line); k++ {
		if a, b := line[k-1], line[k]; reckoned <= b[0] {
			return a[1] + (b[1]-a[1])*(reckoned-a[0])/(b[0]-a[0])
		}
	}
	return line[len(line)-1][1]
}

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
