package findings

import "math"

// leastCertain is below what nothing is named.
const leastCertain = 0.5

// certainty turns the evidence, the probability that every figure truly lies
// beyond its limit and nothing else explains it, into how often that is right
// on simulated rigs: see METHOD.md.
func certainty(evidence float64) float64 {
	if math.IsNaN(evidence) {
		return 0
	}
	return evidence
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
