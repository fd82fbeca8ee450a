package protocol

import (
	"bytes"
	"strings"
)

// maxFields is more than the fields that a line of MaxLine bytes can hold and
// still be of a known shape: 8 of a chan and 16 of the shortest unknown keys.
const maxFields = 28

// maxKeys is the number of known keys of the record that has most of them.
const maxKeys = 9

// fields is a body cut at its spaces, with the first fault found in it. Once a
// fault stands, every further read returns zero and leaves the fault alone, so
// that the leftmost one decides the class (SPEC 8.1).
type fields struct {
	at  [maxFields][]byte
	n   int
	err *SyntaxError
}

// cut splits a body whose first field is not empty. An empty field or too many
// of them is a wrong shape.
func cut(body []byte, clause string) fields {
	var f fields
	if bytes.Contains(body, []byte("  ")) || body[len(body)-1] == ' ' {
		f.fail(BadShape, "2.7", "an empty field: one space between fields, none at the end")
		return f
	}
	for {
		field, rest, more := bytes.Cut(body, []byte{' '})
		if f.n == maxFields {
			f.fail(BadShape, clause, "more than %d fields", maxFields)
			return f
		}
		f.at[f.n] = field
		f.n++
		if !more {
			return f
		}
		body = rest
	}
}

func (f *fields) fail(class Class, clause, format string, args ...any) {
	if f.err == nil {
		f.err = refuse(class, clause, format, args...)
	}
}

// count demands between least and most fields, the word included.
func (f *fields) count(clause string, least, most int) {
	if f.n < least || f.n > most {
		f.fail(BadShape, clause, "%q has %d fields", f.at[0], f.n)
	}
}

// done hands out the record, or the fault.
func (f *fields) done(r Record) (Record, *SyntaxError) {
	if f.err != nil {
		return nil, f.err
	}
	return r, nil
}

// keyed finds the key=value fields from field `from` on: the known keys in
// their order, each at most once, the first `must` of them present. Unknown
// keys may stand anywhere among them (SPEC 3.6). An absent key is nil.
func (f *fields) keyed(clause string, from, must int, known ...string) (values [maxKeys][]byte) {
	next := 0
	for _, field := range f.at[min(from, f.n):f.n] {
		key, value, ok := bytes.Cut(field, []byte{'='})
		if !ok || !isWord(key) || len(value) == 0 {
			f.fail(BadShape, "3.6", "%q is not key=value", field)
			return values
		}
		i := index(known, key)
		if i < 0 {
			continue
		}
		if i < next {
			f.fail(BadShape, "3.6", "key %q out of order or twice", key)
			return values
		}
		values[i], next = value, i+1
	}
	for i := range must {
		if values[i] == nil {
			f.fail(BadShape, clause, "key %q is missing", known[i])
		}
	}
	return values
}

// decimal reads a decimal (SPEC 3.1) within bounds that the clause states.
func (f *fields) decimal(text []byte, low, high int32, clause string) int32 {
	if f.err != nil {
		return 0
	}
	v, ok := decimal(text)
	if !ok {
		f.fail(BadNumber, "3.1", "%q is not a decimal of at most 7 digits, plainly written", text)
		return 0
	}
	if v < low || v > high {
		f.fail(OutOfBounds, clause, "%d is not within %d to %d", v, low, high)
		return 0
	}
	return v
}

// hex reads exactly so many lower-case hex digits (SPEC 3.2).
func (f *fields) hex(text []byte, digits int) uint32 {
	if f.err != nil {
		return 0
	}
	v, upper, ok := hexValue(text)
	switch {
	case !ok || len(text) != digits:
		f.fail(BadNumber, "3.2", "%q is not %d hex digits", text, digits)
	case upper:
		f.fail(UpperHex, "3.2", "%q has an upper-case digit", text)
	}
	return v
}

// oneOf reads a word of a list and returns the list's own string, or "".
func (f *fields) oneOf(text []byte, clause string, list ...string) string {
	if f.err != nil {
		return ""
	}
	if i := index(list, text); i >= 0 {
		return list[i]
	}
	f.fail(BadWord, clause, "%q is not one of: %s", text, strings.Join(list, ", "))
	return ""
}

// letter reads one byte between low and high (SPEC 3.5).
func (f *fields) letter(text []byte, low, high byte) byte {
	if f.err != nil {
		return 0
	}
	if len(text) != 1 || text[0] < low || text[0] > high {
		f.fail(BadWord, "3.5", "%q is not one of %c to %c", text, low, high)
		return 0
	}
	return text[0]
}

// name reads a name (SPEC 3.3).
func (f *fields) name(text []byte) string {
	if f.err != nil {
		return ""
	}
	if !isName(text) {
		f.fail(BadWord, "3.3", "%q is not a name of at most %d letters, digits, '.', '-', '_'", text, maxName)
		return ""
	}
	return string(text)
}

// word reads any lower-case word (SPEC 2.8).
func (f *fields) word(text []byte) string {
	if f.err != nil {
		return ""
	}
	if !isWord(text) {
		f.fail(BadWord, "2.8", "%q is not a word of 2 to 8 lower-case letters", text)
		return ""
	}
	return string(text)
}

func index(list []string, text []byte) int {
	for i, s := range list {
		if s == string(text) {
			return i
		}
	}
	return -1
}
