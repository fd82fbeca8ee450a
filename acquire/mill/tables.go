package mill

import (
	"bytes"
	"cmp"
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"

	"github.com/BurntSushi/toml"
)

// Tables is a mill.toml taken apart for a form: "mill" and "rig" are tables,
// "tensioner", "band", "instrument" lists of tables. Values are texts, numbers,
// lists, or tables inside a table, as JSON has them. Nothing is checked: Parse
// does that, on what Text gives.
type Tables map[string]any

// ReadTables takes a text apart; the error is a *ProfileError.
func ReadTables(text []byte) (Tables, error) {
	if len(text) > largestFile {
		return nil, &ProfileError{Problem: "too long for a mill.toml", Hint: "is it the right file?"}
	}
	t := map[string]any{}
	if _, err := toml.Decode(string(text), &t); err != nil {
		return nil, syntaxFault(string(text), err)
	}
	return t, nil
}

// Text puts the tables together again, and says for each line, from 1, which
// path such as "band.0.net_width" stands in it. Remarks of the text that the
// tables came from are lost.
func (t Tables) Text() (text []byte, paths map[int]string) {
	w := &tableWriter{paths: map[int]string{}}
	w.line("", "# mill.toml, written from the form. Every measure is a number with its unit.")
	for _, name := range w.order(t, "mill", "tensioner", "band", "rig", "instrument") {
		w.part(bareKey(name), name, t[name])
	}
	return w.text.Bytes(), w.paths
}

type tableWriter struct {
	text  bytes.Buffer
	lines int
	paths map[int]string
}

func (w *tableWriter) line(path, text string) {
	w.lines++
	w.paths[w.lines] = path
	w.text.WriteString(text + "\n")
}

// order is the keys of a table: those of that order first, then by alphabet,
// and tables inside it last, as TOML has it.
func (w *tableWriter) order(t map[string]any, first ...string) []string {
	rank := func(key string) int {
		at := slices.Index(first, key)
		if at < 0 {
			at = len(first)
		}
		if isTable(t[key]) && at == len(first) {
			at++
		}
		return at
	}
	return slices.SortedFunc(maps.Keys(t), func(a, b string) int {
		return cmp.Or(rank(a)-rank(b), strings.Compare(a, b))
	})
}

// isTable tells a table, or a list of them, from a value.
func isTable(v any) bool {
	switch v := v.(type) {
	case map[string]any, []map[string]any:
		return true
	case []any:
		if len(v) > 0 {
			_, ok := v[0].(map[string]any)
			return ok
		}
	}
	return false
}

// part writes one table, or each of a list of them.
func (w *tableWriter) part(header, path string, v any) {
	switch v := v.(type) {
	case map[string]any:
		w.table("["+header+"]", header, path, v)
	case []map[string]any:
		for i, one := range v {
			w.table("[["+header+"]]", header, fmt.Sprintf("%s.%d", path, i), one)
		}
	case []any:
		for i, one := range v {
			if one, ok := one.(map[string]any); ok {
				w.table("[["+header+"]]", header, fmt.Sprintf("%s.%d", path, i), one)
			}
		}
	}
}

func (w *tableWriter) table(head, header, path string, t map[string]any) {
	w.line("", "")
	w.line(path, head)
	for _, key := range w.order(t, "name", "set_by", "setting_limit", "cylinders", "bore", "thickness", "net_width", "gross_width", "gauge_length") {
		at := path + "." + key
		if isTable(t[key]) {
			w.part(header+"."+bareKey(key), at, t[key])
			continue
		}
		w.line(at, bareKey(key)+" = "+scalar(t[key]))
	}
}

// bareKey quotes a key that may not stand bare.
func bareKey(key string) string {
	if key == "" || strings.ContainsFunc(key, func(r rune) bool {
		return r != '_' && r != '-' && (r < '0' || r > '9') && (r < 'a' || r > 'z') && (r < 'A' || r > 'Z')
	}) {
		return scalar(key)
	}
	return key
}

// scalar writes a value; JSON's strings are TOML's too. A whole number stays
// one.
func scalar(v any) string {
	switch v := v.(type) {
	case float64:
		if v == math.Trunc(v) && math.Abs(v) < 1e15 {
			return strconv.FormatInt(int64(v), 10)
		}
		return strconv.FormatFloat(v, 'g', -1, 64)
	case []any:
		items := make([]string, len(v))
		for i, one := range v {
			items[i] = scalar(one)
		}
		return "[" + strings.Join(items, ", ") + "]"
	case string, bool, int64, int:
		var b bytes.Buffer
		e := json.NewEncoder(&b)
		e.SetEscapeHTML(false)
		if e.Encode(v) == nil {
			return strings.TrimSpace(b.String())
		}
	}
	return strconv.Quote(fmt.Sprint(v)) // what no form and no JSON holds: Parse says so
}
