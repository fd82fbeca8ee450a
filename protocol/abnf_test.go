package protocol_test

import (
	"bytes"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

// The grammar of SPEC 12 is run, not only printed: a small reader of the ABNF
// of RFC 5234 (and the strings of RFC 7405) that finds all ends of a match.

// ends gives every position at which a match that starts at `at` may end.
type ends func(text string, at int) []int

type grammar struct {
	rules  map[string]ends
	tokens []string
	fault  error
}

var token = regexp.MustCompile(`%s"[^"]*"|"[^"]*"|%x[0-9A-F]+(?:-[0-9A-F]+)?|[0-9]*\*[0-9]*|[0-9]+|[A-Za-z][A-Za-z0-9-]*|[()\[\]/]|;.*`)

func parseGrammar(text string) (*grammar, error) {
	g := &grammar{rules: map[string]ends{
		"SP": span(' ', ' '), "CR": span('\r', '\r'), "LF": span('\n', '\n'), "DIGIT": span('0', '9'),
		"ALPHA": anyOf(span('a', 'z'), span('A', 'Z')),
	}}
	text = regexp.MustCompile(`\n[ \t]+`).ReplaceAllStringFunc(text, func(string) string { return "\r" })
	for line := range strings.SplitSeq(text, "\n") {
		name, definition, ok := strings.Cut(line, " = ")
		if !ok {
			name, definition, ok = strings.Cut(line, "= ")
		}
		if name = strings.TrimSpace(name); name == "" {
			continue
		}
		if !ok || g.rules[name] != nil {
			return nil, fmt.Errorf("rule %q", line)
		}
		g.tokens = nil
		for part := range strings.SplitSeq(definition, "\r") {
			for _, tok := range token.FindAllString(part, -1) {
				if tok[0] != ';' {
					g.tokens = append(g.tokens, tok)
				}
			}
		}
		g.rules[name] = g.choice()
		if g.fault != nil || len(g.tokens) > 0 {
			return nil, fmt.Errorf("rule %q: %v, left %q", name, g.fault, g.tokens)
		}
	}
	return g, nil
}

func (g *grammar) peek(options string) bool {
	return len(g.tokens) > 0 && len(g.tokens[0]) == 1 && strings.Contains(options, g.tokens[0])
}

func (g *grammar) pop() string {
	if len(g.tokens) == 0 {
		g.fault = fmt.Errorf("definition ends early")
		return "SP"
	}
	tok := g.tokens[0]
	g.tokens = g.tokens[1:]
	return tok
}

func (g *grammar) choice() ends {
	options := []ends{g.sequence()}
	for g.peek("/") {
		g.pop()
		options = append(options, g.sequence())
	}
	return anyOf(options...)
}

func (g *grammar) sequence() ends {
	var parts []ends
	for len(g.tokens) > 0 && !g.peek("/)]") {
		parts = append(parts, g.repetition())
	}
	return func(text string, at int) []int {
		now := []int{at}
		for _, part := range parts {
			now = from(now, text, part)
		}
		return now
	}
}

func (g *grammar) repetition() ends {
	least, most := 1, 1
	if tok := g.tokens[0]; tok[0] == '*' || tok[0] >= '0' && tok[0] <= '9' {
		low, high, ranged := strings.Cut(g.pop(), "*")
		least, _ = strconv.Atoi(low)
		most = least
		if ranged {
			if most, _ = strconv.Atoi(high); high == "" {
				most = protocol.MaxLine + 1
			}
		}
	}
	return repeat(g.element(), least, most)
}

func repeat(one ends, least, most int) ends {
	return func(text string, at int) []int {
		now, all := []int{at}, []int(nil)
		for n := 0; len(now) > 0; n++ {
			if n >= least {
				all = append(all, now...)
			}
			if n == most {
				break
			}
			now = from(now, text, one)
		}
		slices.Sort(all)
		return slices.Compact(all)
	}
}

func (g *grammar) element() ends {
	tok := g.pop()
	switch {
	case tok == "(":
		inner := g.choice()
		g.pop()
		return inner
	case tok == "[":
		inner := g.choice()
		g.pop()
		return repeat(inner, 0, 1)
	case strings.HasPrefix(tok, "%x"):
		low, high, ranged := strings.Cut(tok[2:], "-")
		if !ranged {
			high = low
		}
		a, _ := strconv.ParseUint(low, 16, 8)
		b, _ := strconv.ParseUint(high, 16, 8)
		return span(byte(a), byte(b))
	case strings.Contains(tok, `"`):
		same := func(a, b string) bool { return a == b }
		if tok[0] == '"' {
			same = strings.EqualFold // RFC 5234 2.3: letters of either case
		}
		return literal(strings.Trim(strings.TrimPrefix(tok, "%s"), `"`), same)
	}
	return func(text string, at int) []int {
		rule := g.rules[tok]
		if rule == nil {
			g.fault = fmt.Errorf("no rule %q", tok)
			return nil
		}
		return rule(text, at)
	}
}

func from(starts []int, text string, part ends) []int {
	var all []int
	for _, at := range starts {
		all = append(all, part(text, at)...)
	}
	slices.Sort(all)
	return slices.Compact(all)
}

func anyOf(options ...ends) ends {
	return func(text string, at int) []int {
		var all []int
		for _, option := range options {
			all = append(all, option(text, at)...)
		}
		slices.Sort(all)
		return slices.Compact(all)
	}
}

func span(low, high byte) ends {
	return func(text string, at int) []int {
		if at < len(text) && text[at] >= low && text[at] <= high {
			return []int{at + 1}
		}
		return nil
	}
}

func literal(want string, same func(a, b string) bool) ends {
	return func(text string, at int) []int {
		if end := at + len(want); end <= len(text) && same(text[at:end], want) {
			return []int{at + len(want)}
		}
		return nil
	}
}

// specGrammar is SPEC 12, with its two comments in words made true: a known
// key is no unknown key, and an unknown record is tried last (here: never).
func specGrammar(t *testing.T) *grammar {
	t.Helper()
	found := regexp.MustCompile("(?s)```abnf\n(.*?)```").FindStringSubmatch(spec(t))
	if found == nil {
		t.Fatal("no grammar in the spec")
	}
	g, err := parseGrammar(found[1])
	if err != nil {
		t.Fatal(err)
	}
	any, known := g.rules["unknown-key"], matches(`%s"([a-z]+)="`, found[1])
	g.rules["unknown-key"] = func(text string, at int) []int {
		if key, _, _ := strings.Cut(text[at:], "="); slices.Contains(known, key) {
			return nil
		}
		return any(text, at)
	}
	return g
}

func (g *grammar) matches(rule, text string) bool {
	return slices.Contains(g.rules[rule](text, 0), len(text))
}

// grammarSilent are the refusals that are not the grammar's business.
func grammarSilent(class protocol.Class, clause string) bool {
	return class == protocol.BadCheck || class == protocol.OutOfBounds || class == protocol.TooLong ||
		clause == "6.1" || clause == "6.2"
}

func TestTheGrammarAgreesWithTheVectors(t *testing.T) {
	g := specGrammar(t)
	unknown := g.rules["unknown"]
	g.rules["unknown"] = func(string, int) []int { return nil }
	v, err := protocoltest.Load()
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range v.Decode {
		for _, l := range d.Lines {
			line, rest, _ := bytes.Cut(d.Stream[l.Offset:], []byte{'\n'})
			text := string(d.Stream[l.Offset : len(d.Stream)-len(rest)])
			if _, is := l.Record.(protocol.Unknown); is {
				if body, _, _ := strings.Cut(text, ";"); !slices.Contains(unknown(body, 0), len(body)) {
					t.Errorf("decode/%s: %q is no unknown record in the grammar", d.Name, line)
				}
				continue
			}
			if grammarSilent(l.Class, l.Clause) {
				continue
			}
			if got := g.matches("device-line", text); got != (l.Class == "") {
				t.Errorf("decode/%s: %q: grammar says %t, vector %q", d.Name, text, got, l.Class)
			}
		}
	}
	for _, c := range v.Commands {
		if c.Way == "write" || grammarSilent(c.Class, c.Clause) {
			continue
		}
		if got := g.matches("command-line", string(c.Line)); got != (c.Class == "") {
			t.Errorf("command/%s: %q: grammar says %t, vector %q", c.Name, c.Line, got, c.Class)
		}
	}
	if g.fault != nil {
		t.Error(g.fault)
	}
}
