package mill

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// ProfileError is one thing wrong in a mill.toml. Parse joins all that it
// finds, in the order of their lines.
type ProfileError struct {
	Line    int    // 1-based; 0 when the fault is in no line, such as a missing table
	Key     string // such as "tensioner.bore"; "" when no key is at fault
	Problem string
	Hint    string // what to do about it; may be empty
}

func (e *ProfileError) Error() string {
	var b strings.Builder
	if e.Line > 0 {
		fmt.Fprintf(&b, "line %d: ", e.Line)
	}
	if e.Key != "" {
		fmt.Fprintf(&b, "%s: ", e.Key)
	}
	b.WriteString(e.Problem)
	if e.Hint != "" {
		fmt.Fprintf(&b, "; %s", e.Hint)
	}
	return b.String()
}

// faults collects what is wrong, with the lines to say where.
type faults struct {
	lines map[string]int
	found []*ProfileError
}

// add notes a fault at a path such as "tensioner.0.bore". The hint may be "".
func (f *faults) add(path, hint, problem string, args ...any) {
	f.found = append(f.found, &ProfileError{
		Line:    lineOf(f.lines, path),
		Key:     withoutNumbers(path),
		Problem: fmt.Sprintf(problem, args...),
		Hint:    hint,
	})
}

// missing is the problem of a key that is not there.
const missing = "missing"

// notMissing takes back that a key is missing.
func (f *faults) notMissing(path string) {
	key, line := withoutNumbers(path), lineOf(f.lines, path)
	f.found = slices.DeleteFunc(f.found, func(e *ProfileError) bool {
		return e.Problem == missing && e.Key == key && e.Line == line
	})
}

// err joins the faults in line order; nil when there are none.
func (f *faults) err() error {
	const noLine = math.MaxInt // what is missing altogether comes last
	slices.SortStableFunc(f.found, func(a, b *ProfileError) int {
		return cmp.Compare(cmp.Or(a.Line, noLine), cmp.Or(b.Line, noLine))
	})
	errs := make([]error, len(f.found))
	for i, e := range f.found {
		errs[i] = e
	}
	return errors.Join(errs...)
}

// withoutNumbers drops the numbers of array tables: people know the line.
func withoutNumbers(path string) string {
	parts := strings.Split(path, ".")
	kept := parts[:0]
	for _, p := range parts {
		if _, err := strconv.Atoi(p); err != nil {
			kept = append(kept, p)
		}
	}
	return strings.Join(kept, ".")
}
