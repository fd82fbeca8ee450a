package mill

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode"
)

// longestText is the longest name or note in bytes: more would not fit a card.
const longestText = 200

// table is one TOML table being read. Each getter takes one key; rest refuses
// those that none took. A getter of an absent key gives the zero value.
type table struct {
	faults *faults
	path   string
	values map[string]any
	known  []string
}

func (t *table) at(key string) string { return join(t.path, key) }

func (t *table) take(key string) (any, bool) {
	t.known = append(t.known, key)
	v, ok := t.values[key]
	return v, ok
}

func (t *table) has(key string) bool { _, ok := t.values[key]; return ok }

// text takes a string.
func (t *table) text(key string) string {
	v, ok := t.take(key)
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok {
		t.faults.add(t.at(key), "put the text between quote marks", "%s is not text", kind(v))
	}
	if strings.ContainsFunc(s, unicode.IsControl) || len(s) > longestText {
		t.faults.add(t.at(key), fmt.Sprintf("write one line of at most %d characters", longestText), "too long, or more than one line")
		return ""
	}
	return strings.TrimSpace(s)
}

// need takes a string that must not be empty.
func (t *table) need(key, hint string) string {
	s := t.text(key)
	if _, isText := t.values[key].(string); s == "" && (isText || !t.has(key)) {
		t.faults.add(t.at(key), hint, missing)
	}
	return s
}

// number takes a bare number within the limits.
func (t *table) number(key string, low, high float64) float64 {
	v, ok := t.take(key)
	if !ok {
		return 0
	}
	n, ok := v.(float64)
	if i, isInt := v.(int64); isInt {
		n, ok = float64(i), true
	}
	switch {
	case !ok:
		t.faults.add(t.at(key), "this one is a plain number without a unit or quote marks", "%s is not a number", kind(v))
	case !(n >= low && n <= high) || math.IsInf(n, 0):
		t.faults.add(t.at(key), fmt.Sprintf("it must lie between %g and %g", low, high), "%g is impossible", n)
	default:
		return n
	}
	return 0
}

// whole takes a whole number within the limits.
func (t *table) whole(key string, low, high int) int {
	n := t.number(key, float64(low), float64(high))
	if n != math.Trunc(n) {
		t.faults.add(t.at(key), "", "%g is not a whole number", n)
		return 0
	}
	return int(n)
}

// quantity takes a quantity above zero; zero and less are impossible for all
// that a mill.toml holds, with one exception: see orZero.
func (t *table) quantity(key string, dims ...Dim) Quantity {
	q := t.orZero(key, dims...)
	if q.Given() && q.SI == 0 {
		t.faults.add(t.at(key), "leave the line out if it is not known", "%q must be more than zero", q.Entered)
		return Quantity{}
	}
	return q
}

// signed takes a quantity of any sign.
func (t *table) signed(key string, dims ...Dim) Quantity {
	v, ok := t.take(key)
	if !ok {
		return Quantity{}
	}
	return t.parse(key, v, math.Inf(-1), dims...)
}

// orZero takes a quantity of zero or more.
func (t *table) orZero(key string, dims ...Dim) Quantity {
	v, ok := t.take(key)
	if !ok {
		return Quantity{}
	}
	return t.parse(key, v, 0, dims...)
}

// parse reads the value of a key as a quantity, in SI no less than least.
func (t *table) parse(key string, v any, least float64, dims ...Dim) Quantity {
	text, ok := v.(string)
	if !ok {
		hint := fmt.Sprintf("write the number with its unit between quote marks: %s", unitNames(dims))
		t.faults.add(t.at(key), hint, "%s has no unit", kind(v))
		return Quantity{}
	}
	q, err := ParseQuantity(text, dims...)
	var bad *QuantityError
	if errors.As(err, &bad) {
		t.faults.add(t.at(key), bad.Hint, "%q: %s", bad.Text, bad.Problem)
		return Quantity{}
	}
	if q.SI < least {
		t.faults.add(t.at(key), "check the sign", "%q must not be negative", q.Entered)
		return Quantity{}
	}
	return q
}

// needQuantity takes a quantity above zero that must be there.
func (t *table) needQuantity(key, hint string, dims ...Dim) Quantity {
	if !t.has(key) {
		t.faults.add(t.at(key), hint, missing)
	}
	return t.quantity(key, dims...)
}

// date takes a day, as text or as TOML's own date.
func (t *table) date(key string) string {
	v, ok := t.take(key)
	if !ok {
		return ""
	}
	if day, isTime := v.(time.Time); isTime {
		return day.Format(time.DateOnly)
	}
	s, _ := v.(string)
	if _, err := time.Parse(time.DateOnly, strings.TrimSpace(s)); err != nil {
		t.faults.add(t.at(key), `write year-month-day, such as "2027-03-31"`, "%s is not a date", kind(v))
		return ""
	}
	return strings.TrimSpace(s)
}

// oneOf takes one of the words; absent gives "".
func oneOf[T ~string](t *table, key string, words ...T) T {
	s := T(t.text(key))
	if s == "" {
		return ""
	}
	list := make([]string, len(words))
	for i, w := range words {
		if s == w {
			return s
		}
		list[i] = string(w)
	}
	t.faults.add(t.at(key), "write one of: "+strings.Join(list, ", "), "%q is not known", s)
	return ""
}

// one takes a table that may stand once.
func (t *table) one(key string) (*table, bool) {
	v, ok := t.take(key)
	if !ok {
		return nil, false
	}
	m, ok := v.(map[string]any)
	if !ok {
		t.faults.add(t.at(key), "write it once, as ["+withoutNumbers(t.at(key))+"]", "%s is not one table", kind(v))
		return nil, false
	}
	return &table{faults: t.faults, path: t.at(key), values: m}, true
}

// list takes a table that may stand several times.
func (t *table) list(key string) []*table {
	v, ok := t.take(key)
	if !ok {
		return nil
	}
	var all []*table
	add := func(m map[string]any) {
		path := join(t.at(key), strconv.Itoa(len(all)))
		all = append(all, &table{faults: t.faults, path: path, values: m})
	}
	switch v := v.(type) {
	case []map[string]any:
		for _, m := range v {
			add(m)
		}
		return all
	case []any: // inline tables in a list
		for _, e := range v {
			if m, ok := e.(map[string]any); ok {
				add(m)
			}
		}
		if len(all) == len(v) && len(v) > 0 {
			return all
		}
	}
	t.faults.add(t.at(key), "write [["+key+"]] with two brackets, once for each", "%s is not a list of tables", kind(v))
	return nil
}

// needTable notes a table that is not there.
func (t *table) needTable(key, hint string) {
	if !t.has(key) {
		t.faults.add(t.at(key), hint, missing)
	}
}

// rest refuses the keys that no getter took. A key that is only misspelt is not
// reported as missing as well.
func (t *table) rest() {
	for _, key := range slices.Sorted(maps.Keys(t.values)) {
		if slices.Contains(t.known, key) {
			continue
		}
		hint := "known here: " + strings.Join(t.known, ", ")
		if guess := nearest(key, t.known); guess != "" {
			hint = fmt.Sprintf("did you mean %q?", guess)
			t.faults.notMissing(t.at(guess))
		}
		t.faults.add(t.at(key), hint, "unknown key")
	}
}

// kind names a value for a message.
func kind(v any) string {
	switch v := v.(type) {
	case string:
		return strconv.Quote(v)
	case map[string]any, []map[string]any:
		return "a table"
	case []any:
		return "a list"
	}
	return fmt.Sprint(v)
}
