package mill

import "strings"

// nearest is the known word that an unknown one probably means; "" when none is
// near.
func nearest(word string, known []string) string {
	best, guess := len(word)/2+1, ""
	for _, k := range known {
		if d := edits(strings.ToLower(word), k); d < best {
			best, guess = d, k
		}
	}
	return guess
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
