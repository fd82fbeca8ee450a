package report

import (
	"fmt"
	"strings"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// fitted is how the lines came about. It stands in the text and the JSON; the
// printed page has no room for it.
func fitted(r *analyze.Result) []fact {
	return []fact{{"Lines fitted by", methodsText(r.Cycles)}}
}

// methodsText is how the branches were fitted, each way once, with how many
// branches went that way where there are several.
func methodsText(cycles []analyze.Cycle) string {
	var order []estimate.Method
	count := map[estimate.Method]int{}
	for _, c := range cycles {
		for _, f := range []analyze.Fit{c.Rising, c.Falling} {
			if f.Points == 0 {
				continue
			}
			if count[f.Method] == 0 {
				order = append(order, f.Method)
			}
			count[f.Method]++
		}
	}
	var parts []string
	for _, m := range order {
		part := named(string(m), "an unnamed way")
		if len(order) > 1 {
			part += fmt.Sprintf(" (%d)", count[m])
		}
		parts = append(parts, part)
	}
	if len(parts) == 0 {
		return "no line was fitted"
	}
	return strings.Join(parts, ", ")
}
