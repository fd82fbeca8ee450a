package protocol

import "bytes"

// Parse reads one device line, given without its LF; one CR at its end is
// ignored. On error the record is nil. The checks run in the order of SPEC
// 8.1, so that a broken line has exactly one class. The record keeps no
// reference to line.
func Parse(line []byte) (Record, *SyntaxError) {
	if len(line) >= MaxLine {
		return nil, refuse(TooLong, "2.3", "more than %d bytes with the LF", MaxLine)
	}
	body, err := unseal(dropCR(line))
	if err != nil {
		return nil, err
	}
	word, text, hasText := bytes.Cut(body, []byte{' '})
	if !isWord(word) {
		return nil, refuse(BadWord, "2.8", "%q is not a record word", word)
	}
	if read := reader(word); read != nil {
		return read(body)
	}
	if string(word) == "note" {
		if !hasText || len(text) == 0 {
			return nil, refuse(BadShape, "5.9", "a note without text")
		}
		return Note{Text: string(text)}, nil
	}
	return Unknown{Word: string(word), Body: string(body)}, nil
}

// reader is the reader of a known record made of fields, or nil.
func reader(word []byte) func(body []byte) (Record, *SyntaxError) {
	switch string(word) {
	case "val":
		return parseVal
	case "beat":
		return parseBeat
	case "btn":
		return parseButton
	case "here":
		return parseHere
	case "chan":
		return parseChan
	case "did":
		return parseDid
	case "wont":
		return parseWont
	case "echo":
		return parseEcho
	}
	return nil
}

func parseHere(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.1")
	f.count("5.1", 9, maxFields)
	keys := f.keyed("5.1", 4, 5, "hz", "ch", "up", "state", "why", "boot", "sim")
	h := Here{
		Version:  int(f.decimal(f.at[1], 1, 99, "5.1")),
		Model:    f.name(f.at[2]),
		Serial:   f.name(f.at[3]),
		TickHz:   uint32(f.decimal(keys[0], 1, 1_000_000, "5.1")),
		Channels: int(f.decimal(keys[1], 0, 26, "5.1")),
		Up:       f.hex(keys[2], 8),
		Running:  f.oneOf(keys[3], "5.1", "rest", "run") == "run",
		Cause:    Cause(f.oneOf(keys[4], "5.1", causes()...)),
	}
	if keys[5] != nil {
		h.Boot, h.HasBoot = f.hex(keys[5], 8), true
	}
	if keys[6] != nil {
		h.Simulated = f.oneOf(keys[6], "5.1", "1") == "1"
	}
	return f.done(h)
}

func causes() []string {
	return []string{string(CauseAsked), string(CausePower), string(CauseReset),
		string(CauseBrown), string(CauseWatchdog), string(CauseUnknown)}
}

func parseVal(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.3")
	f.count("5.3", 5, 6)
	hasCount := f.n == 6
	status := f.at[4]
	if f.err == nil && len(status) == 1 && bytes.IndexByte([]byte("glhxf"), status[0]) >= 0 &&
		Status(status[0]).carriesCount() != hasCount {
		f.fail(BadShape, "5.3", "status %q with a count: %t", status, hasCount)
	}
	v := Val{
		Channel:  f.letter(f.at[1], 'a', 'z'),
		Seq:      uint16(f.hex(f.at[2], 4)),
		Tick:     f.hex(f.at[3], 8),
		HasCount: hasCount,
	}
	if s := f.oneOf(status, "5.3", "g", "l", "h", "x", "f"); s != "" {
		v.Status = Status(s[0])
	}
	if hasCount {
		v.Count = f.decimal(f.at[5], -maxDecimal, maxDecimal, "5.3")
	}
	return f.done(v)
}

// Ok reports whether the count is a reading that may be used as a value: Good
// only. At the end of a range the count is a bound, not a value.
func (s Status) Ok() bool { return s == Good }

func (s Status) carriesCount() bool { return s == Good || s == Low || s == High }

func parseButton(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.4")
	f.count("5.4", 5, 5)
	return f.done(Button{
		ID:   f.letter(f.at[1], '1', '9'),
		Seq:  uint16(f.hex(f.at[2], 4)),
		Tick: f.hex(f.at[3], 8),
		Down: f.oneOf(f.at[4], "5.4", "down", "up") == "down",
	})
}

func parseBeat(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.5")
	f.count("5.5", 5, 5)
	return f.done(Beat{
		Seq:     uint16(f.hex(f.at[1], 4)),
		Tick:    f.hex(f.at[2], 8),
		Dropped: f.hex(f.at[3], 8),
		Refused: f.hex(f.at[4], 8),
	})
}

func parseDid(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.6")
	f.count("5.6", 3, 3)
	return f.done(Did{Token: byte(f.hex(f.at[1], 2)), Verb: Verb(f.oneOf(f.at[2], "5.6", "who", "run", "rest", "pace"))})
}

func parseWont(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.7")
	f.count("5.7", 4, 4)
	return f.done(Wont{Token: byte(f.hex(f.at[1], 2)), Verb: f.word(f.at[2]), Why: f.word(f.at[3])})
}

func parseEcho(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.8")
	f.count("5.8", 3, 3)
	return f.done(Echo{Token: byte(f.hex(f.at[1], 2)), Tick: f.hex(f.at[2], 8)})
}
