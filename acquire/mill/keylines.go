package mill

import (
	"strconv"
	"strings"
)

// keyLines finds the line of every key and table header of a TOML text that the
// decoder has accepted: the decoder itself keeps lines only for errors of
// syntax. A path joins the parts with dots, tables of an array by their number:
// "tensioner.0.bore". What stands inside an inline table or an array of them
// has no line of its own; lineOf then gives that of the key around it.
func keyLines(text string) map[string]int {
	s := &keyScan{text: text, line: 1, lines: map[string]int{}, count: map[string]int{}}
	for s.pos < len(s.text) {
		s.statement()
	}
	return s.lines
}

// lineOf is the line of the path, or of the nearest path above it; 0 when the
// text has none of them.
func lineOf(lines map[string]int, path string) int {
	for path != "" {
		if n, ok := lines[path]; ok {
			return n
		}
		path = path[:max(strings.LastIndexByte(path, '.'), 0)]
	}
	return 0
}

// keyScan walks over a TOML text statement by statement.
type keyScan struct {
	text  string
	pos   int
	line  int
	table string         // path of the table that keys now belong to
	lines map[string]int // first line of each path
	count map[string]int // tables so far of each array
}

// statement takes one header, one key with its value, or one blank or comment.
func (s *keyScan) statement() {
	switch s.text[s.pos] {
	case '\n', '\r', ' ', '\t':
		s.next()
	case '#':
		s.toLineEnd()
	case '[':
		s.header()
	default:
		at := s.line
		parts := s.key('=')
		s.note(join(s.table, s.resolve(s.table, parts)), at)
		s.value()
	}
}

// header takes "[a.b]" or "[[a.b]]".
func (s *keyScan) header() {
	at := s.line
	array := strings.HasPrefix(s.text[s.pos:], "[[")
	s.pos++
	if array {
		s.pos++
	}
	parts := s.key(']')
	s.toLineEnd()
	if len(parts) == 0 {
		return
	}
	if !array {
		s.table = s.resolve("", parts)
		s.note(s.table, at)
		return
	}
	last := len(parts) - 1
	path := join(s.resolve("", parts[:last]), parts[last])
	s.note(path, at)
	s.table = join(path, strconv.Itoa(s.count[path]))
	s.count[path]++
	s.note(s.table, at)
}

// resolve joins the parts below a table, and steps into the latest table of
// each array that it meets, as TOML does.
func (s *keyScan) resolve(table string, parts []string) string {
	path, below := table, ""
	for _, part := range parts {
		path, below = join(path, part), join(below, part)
		if n := s.count[path]; n > 0 {
			path = join(path, strconv.Itoa(n-1))
			below = join(below, strconv.Itoa(n-1))
		}
	}
	return below
}

// key takes a dotted key up to and with its end mark.
func (s *keyScan) key(end byte) (parts []string) {
	var part strings.Builder
	for s.pos < len(s.text) {
		switch c := s.text[s.pos]; c {
		case end, '.', '\n':
			parts = append(parts, part.String())
			part.Reset()
			s.next()
			if c != '.' {
				return parts
			}
		case '"', '\'':
			start := s.pos + 1
			s.quoted()
			part.WriteString(s.text[start:max(s.pos-1, start)])
		case ' ', '\t', '\r':
			s.next()
		default:
			part.WriteByte(c)
			s.next()
		}
	}
	return append(parts, part.String())
}

// value skips a value up to the line end that closes it.
func (s *keyScan) value() {
	depth := 0
	for s.pos < len(s.text) {
		switch s.text[s.pos] {
		case '"', '\'':
			s.quoted()
			continue
		case '#':
			s.toLineEnd()
			continue
		case '[', '{':
			depth++
		case ']', '}':
			depth--
		case '\n':
			if depth <= 0 {
				s.next()
				return
			}
		}
		s.next()
	}
}

// quoted skips a string of any of TOML's four kinds.
func (s *keyScan) quoted() {
	quote := s.text[s.pos]
	mark := string(quote)
	if long := strings.Repeat(mark, 3); strings.HasPrefix(s.text[s.pos:], long) {
		mark = long
	}
	s.pos += len(mark)
	for s.pos < len(s.text) && !strings.HasPrefix(s.text[s.pos:], mark) {
		if quote == '"' && s.text[s.pos] == '\\' {
			s.next()
		}
		s.next()
	}
	s.pos = min(s.pos+len(mark), len(s.text))
	for len(mark) == 3 && s.pos < len(s.text) && s.text[s.pos] == quote {
		s.pos++ // a long string may end in up to five quotes
	}
}

// next steps over one byte and counts lines.
func (s *keyScan) next() {
	if s.pos >= len(s.text) {
		return
	}
	if s.text[s.pos] == '\n' {
		s.line++
	}
	s.pos++
}

func (s *keyScan) toLineEnd() {
	for s.pos < len(s.text) && s.text[s.pos] != '\n' {
		s.pos++
	}
}

func (s *keyScan) note(path string, line int) {
	if _, seen := s.lines[path]; !seen {
		s.lines[path] = line
	}
}

func join(path, part string) string {
	if path == "" || part == "" {
		return path + part
	}
	return path + "." + part
}
