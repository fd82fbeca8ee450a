package report

import (
	"strings"
	"unicode"
)

// Longest texts taken over from the profile, a device or a warning, in
// characters; longer ones end in "...".
const (
	nameLength = 60
	sealLength = 128
	textLength = 600
	listLength = 40 // notes and warnings printed; the rest is counted
)

// clean makes text from outside fit for paper: valid UTF-8, single spaces, no
// control or invisible format characters, at most limit characters.
func clean(text string, limit int) string {
	text = text[:min(len(text), 16*limit)] // more is never shown: what is thrown away costs nothing
	visible := strings.Map(func(r rune) rune {
		switch {
		case unicode.IsSpace(r):
			return ' '
		case unicode.Is(unicode.Cf, r), unicode.IsControl(r):
			return -1
		}
		return r
	}, strings.ToValidUTF8(text, "\uFFFD"))
	runes := []rune(strings.Join(strings.Fields(visible), " "))
	if len(runes) <= limit {
		return string(runes)
	}
	return string(runes[:limit-3]) + "..."
}
