package recording

import (
	"bytes"
	"crypto/sha256"
	"errors"
	"fmt"
	"hash"
	"strconv"
	"time"
)

// The tags that open a line (SPEC 2).
const (
	wireTag    = "w "
	eventTag   = "e "
	headerTag  = "h "
	profileTag = "p "
	sealTag    = "seal "
	endTag     = "end "
)

func appendSeal(dst []byte, block int) []byte {
	dst = append(dst, sealTag...)
	dst = strconv.AppendInt(dst, int64(block), 10)
	return append(dst, ' ')
}

func appendEnd(dst []byte, blocks, entries int) []byte {
	dst = append(dst, endTag...)
	dst = strconv.AppendInt(dst, int64(blocks), 10)
	dst = append(dst, ' ')
	dst = strconv.AppendInt(dst, int64(entries), 10)
	return append(dst, ' ')
}

// checkEntry refuses what appendEntry cannot write so that it reads back equal.
func checkEntry(e Entry, devices int) error {
	switch {
	case (e.Wire == nil) == (e.Event == nil):
		return errors.New("record an entry: it must be a wire line or an event, one of them")
	case e.Device < -1 || e.Device >= devices:
		return fmt.Errorf("record an entry: there is no device %d", e.Device)
	case e.Wire != nil && e.Device < 0:
		return errors.New("record a wire line: it names no device")
	case e.HasAt && e.At < 0:
		return fmt.Errorf("record an entry: its time %v is before the start", e.At)
	case e.Event != nil && !isKind(string(e.Event.Kind)):
		return fmt.Errorf("record an event: %q is not lower-case letters and hyphens", e.Event.Kind)
	}
	return nil
}

func isKind[T string | []byte](word T) bool {
	for i := 0; i < len(word); i++ {
		c := word[i]
		if (c < 'a' || c > 'z') && (c != '-' || i == 0) {
			return false
		}
	}
	return len(word) > 0
}

func appendEntry(dst []byte, e Entry) []byte {
	if e.Event == nil {
		dst = append(dst, wireTag...)
	} else {
		dst = append(dst, eventTag...)
	}
	if e.Device < 0 {
		dst = append(dst, '-')
	} else {
		dst = strconv.AppendInt(dst, int64(e.Device), 10)
	}
	dst = append(dst, ' ')
	if e.HasAt {
		dst = strconv.AppendInt(dst, int64(e.At), 10)
	} else {
		dst = append(dst, '-')
	}
	dst = append(dst, ' ')
	if e.Event == nil {
		dst = appendEscaped(dst, e.Wire)
	} else {
		dst = append(dst, e.Event.Kind...)
		dst = append(dst, ' ')
		dst = appendEscaped(dst, e.Event.Text)
	}
	return append(dst, '\n')
}

// parseEntry is the inverse of appendEntry; line is without its LF and is
// overwritten. A wire line aliases it.
func parseEntry(line []byte, devices int) (Entry, error) {
	isEvent := bytes.HasPrefix(line, []byte(eventTag))
	if !isEvent && !bytes.HasPrefix(line, []byte(wireTag)) {
		return Entry{}, errors.New("a line has no tag of SPEC 2")
	}
	device, rest, ok1 := bytes.Cut(line[len(wireTag):], []byte{' '})
	at, text, ok2 := bytes.Cut(rest, []byte{' '})
	if !ok1 || !ok2 {
		return Entry{}, errors.New("an entry has too few fields")
	}
	e := Entry{Device: -1}
	if !isDash(device) {
		n, ok := parseNumber(device)
		if !ok || n >= int64(devices) {
			return Entry{}, errors.New("an entry names a device that the header does not")
		}
		e.Device = int(n)
	}
	if !isDash(at) {
		n, ok := parseNumber(at)
		if !ok {
			return Entry{}, errors.New("an entry's time is not a number")
		}
		e.At, e.HasAt = time.Duration(n), true
	}
	if isEvent {
		return parseEvent(e, text)
	}
	if e.Device < 0 {
		return Entry{}, errors.New("a wire line names no device")
	}
	wire, err := unescape(text)
	e.Wire = wire
	return e, err
}

func parseEvent(e Entry, rest []byte) (Entry, error) {
	kind, text, ok := bytes.Cut(rest, []byte{' '})
	if !ok || !isKind(kind) {
		return Entry{}, errors.New("an event has no kind")
	}
	text, err := unescape(text)
	e.Event = &Event{Kind: EventKind(kind), Text: string(text)}
	return e, err
}

func isDash(field []byte) bool { return len(field) == 1 && field[0] == '-' }

// parseNumber takes a decimal of 0 to 2^63-1 without sign or leading zero.
func parseNumber(field []byte) (int64, bool) {
	if len(field) == 0 || len(field) > 19 || (field[0] == '0' && len(field) > 1) {
		return 0, false
	}
	var n uint64
	for _, c := range field {
		if c < '0' || c > '9' {
			return 0, false
		}
		n = n*10 + uint64(c-'0')
	}
	return int64(n), n <= 1<<63-1
}

// newSum is the check sum of seals and the end record (SPEC 6).
func newSum() hash.Hash { return sha256.New() }
