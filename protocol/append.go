package protocol

import (
	"fmt"
	"strconv"
)

// Append appends the record's whole line, check and LF included. A record that
// this version would not read back as the same record is refused with a
// *SyntaxError and dst comes back as it was: the parser's rules are the only
// rules. Keys that stand at their default are left out (SPEC 5.2).
func Append(dst []byte, r Record) ([]byte, error) {
	from := len(dst)
	out, ok := appendBody(dst, r)
	if !ok {
		return dst, refuse(BadWord, "2.8", "no record of this type: %T", r)
	}
	out = seal(out, from)
	back, err := Parse(out[from : len(out)-1])
	if err != nil {
		return dst, fmt.Errorf("record %+v cannot be written: %w", r, err)
	}
	if back != r {
		return dst, fmt.Errorf("record %+v cannot be written: %w", r,
			refuse(BadShape, "2.7", "it would read back as %+v", back))
	}
	return out, nil
}

func appendBody(dst []byte, r Record) (_ []byte, ok bool) {
	switch r := r.(type) {
	case Here:
		dst = r.body(dst)
	case Chan:
		dst = r.body(dst)
	case Val:
		dst = r.body(dst)
	case Button:
		dst = append(append(dst, "btn "...), r.ID, ' ')
		dst = appendStamp(dst, r.Seq, r.Tick)
		dst = append(dst, pick(r.Down, " down", " up")...)
	case Beat:
		dst = appendStamp(append(dst, "beat "...), r.Seq, r.Tick)
		dst = appendHex(append(dst, ' '), r.Dropped, 8)
		dst = appendHex(append(dst, ' '), r.Refused, 8)
	case Did:
		dst = appendHex(append(dst, "did "...), uint32(r.Token), 2)
		dst = append(append(dst, ' '), r.Verb...)
	case Wont:
		dst = appendHex(append(dst, "wont "...), uint32(r.Token), 2)
		dst = append(append(dst, ' '), r.Verb...)
		dst = append(append(dst, ' '), r.Why...)
	case Echo:
		dst = appendHex(append(dst, "echo "...), uint32(r.Token), 2)
		dst = appendHex(append(dst, ' '), r.Tick, 8)
	case Note:
		dst = append(append(dst, "note "...), r.Text...)
	case Unknown:
		dst = append(dst, r.Body...)
	default:
		return dst, false
	}
	return dst, true
}

func (h Here) body(dst []byte) []byte {
	dst = appendDecimal(append(dst, "here "...), int64(h.Version))
	dst = append(append(dst, ' '), h.Model...)
	dst = append(append(dst, ' '), h.Serial...)
	dst = appendDecimal(append(dst, " hz="...), int64(h.TickHz))
	dst = appendDecimal(append(dst, " ch="...), int64(h.Channels))
	dst = appendHex(append(dst, " up="...), h.Up, 8)
	dst = append(dst, pick(h.Running, " state=run", " state=rest")...)
	dst = append(append(dst, " why="...), h.Cause...)
	if h.HasBoot {
		dst = appendHex(append(dst, " boot="...), h.Boot, 8)
	}
	if h.Simulated {
		dst = append(dst, " sim=1"...)
	}
	return dst
}

func (c Chan) body(dst []byte) []byte {
	dst = append(append(dst, "chan "...), c.ID, ' ')
	dst = append(append(dst, c.Quantity...), ' ')
	dst = append(append(dst, c.Unit...), ' ')
	dst = appendDecimal(dst, int64(c.Mantissa))
	dst = appendDecimal(append(dst, 'e'), int64(c.Exponent))
	dst = appendDecimal(append(dst, " lo="...), int64(c.Low))
	dst = appendDecimal(append(dst, " hi="...), int64(c.High))
	dst = appendDecimal(append(dst, " per="...), int64(c.Period))
	if c.Res != 1 {
		dst = appendDecimal(append(dst, " res="...), int64(c.Res))
	}
	if c.ZeroCount != 0 {
		dst = appendDecimal(append(dst, " zero="...), int64(c.ZeroCount))
	}
	if c.Shows != ShowsUnknown {
		dst = append(append(dst, " shows="...), c.Shows...)
	}
	if c.Face != 0 {
		dst = append(append(dst, " face="...), c.Face)
	}
	if c.Span != 0 {
		dst = append(append(dst, " span="...), c.Span+'0')
	}
	if c.Serial != "" {
		dst = append(append(dst, " sn="...), c.Serial...)
	}
	return dst
}

func (v Val) body(dst []byte) []byte {
	dst = append(append(dst, "val "...), v.Channel, ' ')
	dst = appendStamp(dst, v.Seq, v.Tick)
	dst = append(dst, ' ', byte(v.Status))
	if v.HasCount {
		dst = appendDecimal(append(dst, ' '), int64(v.Count))
	}
	return dst
}

// AppendCommand appends the command's whole line with its LF. It refuses as
// Append does.
func AppendCommand(dst []byte, c Command) ([]byte, error) {
	from := len(dst)
	out := append(dst, c.Verb...)
	if c.Bare {
		out = append(out, '\n')
	} else {
		out = appendHex(append(out, ' '), uint32(c.Token), 2)
		if c.Verb == Pace {
			out = append(out, ' ', c.Channel, ' ')
			out = appendDecimal(out, int64(c.Period))
		}
		out = seal(out, from)
	}
	back, err := ParseCommand(out[from : len(out)-1])
	if err != nil {
		return dst, fmt.Errorf("command %+v cannot be written: %w", c, err)
	}
	if back != c {
		return dst, fmt.Errorf("command %+v cannot be written: %w", c,
			refuse(BadShape, "2.7", "it would read back as %+v", back))
	}
	return out, nil
}

func appendStamp(dst []byte, seq uint16, tick uint32) []byte {
	dst = appendHex(dst, uint32(seq), 4)
	return appendHex(append(dst, ' '), tick, 8)
}

func appendDecimal(dst []byte, v int64) []byte { return strconv.AppendInt(dst, v, 10) }

func pick(first bool, a, b string) string {
	if first {
		return a
	}
	return b
}
