package protocoltest

import (
	"fmt"
	"strconv"

	"tautramp/protocol"
)

// The rows are the vectors as the files spell them.

type decodeRow struct {
	Name    string
	Clauses []string
	Stream  octets
	Lines   []struct {
		Number int
		Offset int64
		Record *fields
		Class  protocol.Class
		Clause string
	}
}

func (r decodeRow) vector() (DecodeVector, error) {
	v := DecodeVector{Name: r.Name, Clauses: r.Clauses, Stream: r.Stream}
	for _, l := range r.Lines {
		line := DecodeLine{Number: l.Number, Offset: l.Offset, Class: l.Class, Clause: l.Clause}
		if l.Record != nil {
			record, err := l.Record.record()
			if err != nil {
				return v, fmt.Errorf("%s: %w", r.Name, err)
			}
			line.Record = record
		}
		if (line.Record == nil) == (line.Class == "") {
			return v, fmt.Errorf("%s: line %d is neither a record nor a refusal", r.Name, l.Number)
		}
		v.Lines = append(v.Lines, line)
	}
	return v, nil
}

type encodeRow struct {
	Name    string
	Clauses []string
	Record  fields
	Line    octets
	Class   protocol.Class
}

func (r encodeRow) vector() (EncodeVector, error) {
	record, err := r.Record.record()
	if err != nil {
		err = fmt.Errorf("%s: %w", r.Name, err)
	}
	return EncodeVector{r.Name, r.Clauses, record, r.Line, r.Class}, err
}

type commandRow struct {
	Name    string
	Clauses []string
	Way     string
	Command struct {
		Verb    protocol.Verb
		Token   *byte
		Channel letter
		Period  uint32
	}
	Answer struct {
		Verb  protocol.Verb
		Token byte
	}
	Line   octets
	Class  protocol.Class
	Clause string
}

func (r commandRow) vector() (CommandVector, error) {
	v := CommandVector{Name: r.Name, Clauses: r.Clauses, Way: r.Way, Line: r.Line, Class: r.Class, Clause: r.Clause}
	if r.Way != "both" && r.Way != "read" && r.Way != "write" {
		return v, fmt.Errorf("%s: way %q", r.Name, r.Way)
	}
	if r.Class != "" && r.Way == "read" {
		v.Command = protocol.Command{Verb: r.Answer.Verb, Token: r.Answer.Token}
		return v, nil
	}
	c := r.Command
	v.Command = protocol.Command{Verb: c.Verb, Channel: byte(c.Channel), Period: c.Period, Bare: c.Token == nil}
	if c.Token != nil {
		v.Command.Token = *c.Token
	}
	return v, nil
}

type valueRow struct {
	Name    string
	Clauses []string
	Chan    octets
	Count   int32
	SI      string
	LeastSI string `json:"least_si"`
}

func (r valueRow) vector() (ValueVector, error) {
	v := ValueVector{Name: r.Name, Clauses: r.Clauses, Count: r.Count}
	record, bad := protocol.Parse(r.Chan[:len(r.Chan)-1])
	if bad != nil {
		return v, fmt.Errorf("%s: %w", r.Name, bad)
	}
	v.Chan = record.(protocol.Chan)
	var err error
	if v.SI, err = strconv.ParseFloat(r.SI, 64); err != nil {
		return v, err
	}
	v.LeastSI, err = strconv.ParseFloat(r.LeastSI, 64)
	return v, err
}

// letter is a string of one byte, or of none.
type letter byte

func (l *letter) UnmarshalJSON(data []byte) error {
	var o octets
	if err := o.UnmarshalJSON(data); err != nil {
		return err
	}
	if len(o) > 1 {
		return fmt.Errorf("%q is more than one byte", o)
	}
	if len(o) == 1 {
		*l = letter(o[0])
	}
	return nil
}

// fields is a record as the files spell it; which fields count, Word says.
type fields struct {
	Word string

	Version           int
	Model, Serial     string
	Hz, Up            uint32
	Ch                int
	State             string
	Why               string
	Boot              *uint32
	Sim               bool
	Channel           letter
	Quantity          protocol.Quantity
	Unit              string
	Mantissa          int32
	Exponent          int8
	Lo, Hi, Res, Zero int32
	Per               uint32
	Shows             protocol.Shows
	Face              letter
	Span              byte
	SN                string
	Seq               uint16
	Tick              uint32
	Status            letter
	Count             *int32
	Button            byte
	Edge              string
	Dropped, Refused  uint32
	Token             byte
	Verb              string
	Text              octets
	Is                string
	Body              string
}

func (f fields) record() (protocol.Record, error) {
	switch f.Word {
	case "here":
		h := protocol.Here{Version: f.Version, Model: f.Model, Serial: f.Serial, TickHz: f.Hz, Channels: f.Ch,
			Up: f.Up, Running: f.State == "run", Cause: protocol.Cause(f.Why)}
		h.Simulated = f.Sim
		if f.Boot != nil {
			h.Boot, h.HasBoot = *f.Boot, true
		}
		return h, nil
	case "chan":
		return protocol.Chan{ID: byte(f.Channel), Quantity: f.Quantity, Unit: f.Unit, Mantissa: f.Mantissa,
			Exponent: f.Exponent, ZeroCount: f.Zero, Low: f.Lo, High: f.Hi, Res: f.Res, Period: f.Per,
			Shows: f.Shows, Face: byte(f.Face), Span: f.Span, Serial: f.SN}, nil
	case "val":
		v := protocol.Val{Channel: byte(f.Channel), Seq: f.Seq, Tick: f.Tick, Status: protocol.Status(f.Status)}
		if f.Count != nil {
			v.Count, v.HasCount = *f.Count, true
		}
		return v, nil
	case "btn":
		return protocol.Button{ID: '0' + f.Button, Seq: f.Seq, Tick: f.Tick, Down: f.Edge == "down"}, nil
	case "beat":
		return protocol.Beat{Seq: f.Seq, Tick: f.Tick, Dropped: f.Dropped, Refused: f.Refused}, nil
	case "did":
		return protocol.Did{Token: f.Token, Verb: protocol.Verb(f.Verb)}, nil
	case "wont":
		return protocol.Wont{Token: f.Token, Verb: f.Verb, Why: f.Why}, nil
	case "echo":
		return protocol.Echo{Token: f.Token, Tick: f.Tick}, nil
	case "note":
		return protocol.Note{Text: string(f.Text)}, nil
	case "unknown":
		return protocol.Unknown{Word: f.Is, Body: f.Body}, nil
	}
	return nil, fmt.Errorf("word %q", f.Word)
}
