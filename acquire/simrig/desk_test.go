package simrig

import (
	"bytes"
	"fmt"
	"strings"
	"testing"

	"tautramp/protocol"
)

// desk is a rig whose boards are connected to nothing but the test, with time
// moved by hand.
type desk struct {
	*testing.T
	rig *Rig
	s   float64
}

func newDesk(t *testing.T, c Config) *desk {
	t.Helper()
	d := &desk{T: t, rig: mustNew(t, c)}
	for _, b := range d.rig.boards {
		b.plugged = true
		b.boot(0, protocol.CausePower)
	}
	return d
}

func (d *desk) pass(s float64) {
	d.s += s
	d.rig.advance(d.s)
}

// hear takes what a board has to say. Every line must parse.
func (d *desk) hear(board int) []protocol.Record {
	d.Helper()
	return records(d.T, d.rig.boards[board].take(nil))
}

// tell sends text and hears the answer.
func (d *desk) tell(board int, text string) []protocol.Record {
	d.Helper()
	d.rig.boards[board].receive([]byte(text), d.s)
	return d.hear(board)
}

// ask sends a command and hears the answer.
func (d *desk) ask(board int, c protocol.Command) []protocol.Record {
	d.Helper()
	return d.tell(board, string(encode(d.T, c)))
}

func encode(t *testing.T, c protocol.Command) []byte {
	t.Helper()
	line, err := protocol.AppendCommand(nil, c)
	if err != nil {
		t.Fatal(err)
	}
	return line
}

func records(t *testing.T, text []byte) (list []protocol.Record) {
	t.Helper()
	scanner := protocol.NewScanner(bytes.NewReader(text))
	for scanner.Scan() {
		line := scanner.Line()
		if line.Err != nil {
			t.Fatalf("the board sent %q: %v", line.Text, line.Err)
		}
		list = append(list, line.Record)
	}
	if scanner.Err() != nil {
		t.Fatal(scanner.Err())
	}
	return list
}

// words names the records in their order, repeats once.
func words(list []protocol.Record) string {
	var out []string
	for _, r := range list {
		name := strings.ToLower(strings.TrimPrefix(fmt.Sprintf("%T", r), "protocol."))
		if len(out) == 0 || out[len(out)-1] != name {
			out = append(out, name)
		}
	}
	return strings.Join(out, " ")
}

// only are the records of one type.
func only[R protocol.Record](list []protocol.Record) (out []R) {
	for _, r := range list {
		if r, ok := r.(R); ok {
			out = append(out, r)
		}
	}
	return out
}

// sequence checks that numbered lines follow each other and returns how many
// numbers are missing between them.
func sequence(t *testing.T, list []protocol.Record) (missing int) {
	t.Helper()
	next, begun := uint16(0), false
	for _, r := range list {
		var seq uint16
		switch r := r.(type) {
		case protocol.Val:
			seq = r.Seq
		case protocol.Button:
			seq = r.Seq
		case protocol.Beat:
			seq = r.Seq
		default:
			continue
		}
		if begun {
			missing += int(seq - next)
		}
		begun, next = true, seq+1
	}
	return missing
}
