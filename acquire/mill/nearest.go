package mill

import (
	"fmt"
	"strings"
)

// nearest is the hint for an unknown word: the known one that it probably
// means, or all of them.
func nearest(word string, known []string) string {
	best, bestAt := len(word)/2+1, -1
	for i, k := range known {
		if d := edits(strings.ToLower(word), k); d < best {
			best, bestAt = d, i
		}
	}
	if bestAt >= 0 {
		return fmt.Sprintf("did you mean %q?", known[bestAt])
	}
	return "known here: " + strings.Join(known, ", ")
}

// edits counts the single-character changes from a to b (Levenshtein distance).
func edits(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		diagonal := row[0]
		row[0] = i + 1
		for j := range len(b) {
			change := diagonal
			if a[i] != b[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
