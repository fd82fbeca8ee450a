package mill

import (
	"errors"
	"fmt"
	"strings"

	"github.com/BurntSushi/toml"
)

// syntaxFault puts an error of the decoder into our own terms.
func syntaxFault(text string, err error) error {
	bad := &ProfileError{Problem: err.Error(), Hint: "this is not TOML: compare with the written example"}
	var syntax toml.ParseError
	if !errors.As(err, &syntax) {
		return bad
	}
	bad.Line, bad.Key, bad.Problem = syntax.Position.Line, syntax.LastKey, syntax.Message
	lines := strings.Split(text, "\n")
	if n := bad.Line; n < 1 || n > len(lines) {
		return bad
	}
	if key, value, ok := bareText(lines[bad.Line-1]); ok {
		bad.Key = join(tableAbove(lines[:bad.Line-1]), key)
		bad.Problem = value + " stands without quote marks"
		bad.Hint = fmt.Sprintf("this is not TOML: put quote marks around it: %s = %q", key, value)
	}
	return bad
}

// bareText finds a key whose value is a measure or a word without its quote
// marks: the usual slip.
func bareText(line string) (key, value string, ok bool) {
	key, value, ok = strings.Cut(line, "=")
	value, _, _ = strings.Cut(value, "#")
	key, value = strings.TrimSpace(key), strings.TrimSpace(value)
	if !ok || key == "" || value == "" || strings.ContainsAny(key, " []{}\"'") || strings.ContainsAny(value, "[]{}\"'=\\") {
		return "", "", false
	}
	return key, value, true
}

// tableAbove is the name in the last header of the lines.
func tableAbove(lines []string) string {
	for i := len(lines) - 1; i >= 0; i-- {
		header, _, _ := strings.Cut(lines[i], "#")
		if header = strings.TrimSpace(header); strings.HasPrefix(header, "[") {
			return strings.Trim(header, "[] ")
		}
	}
	return ""
}
