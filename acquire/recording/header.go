package recording

import (
	"bytes"
	"encoding/hex"
	"errors"
	"fmt"
	"math"
	"strconv"
	"time"

	"tautramp/acquire/mill"
)

const (
	magic   = "tautramp recording "
	version = "1"
)

// appendHeader writes the first block of a file (SPEC 4), unsealed.
func appendHeader(dst []byte, h Header) ([]byte, error) {
	if err := checkHeader(h); err != nil {
		return nil, fmt.Errorf("write a recording's header: %w", err)
	}
	dst = append(dst, magic+version+"\n"...)
	put := func(key, value string) {
		dst = append(dst, headerTag+key+" "...)
		dst = appendEscaped(dst, value)
		dst = append(dst, '\n')
	}
	put("program", h.Program)
	put("started", h.Started.Round(0).Format(time.RFC3339Nano))
	put("source", string(h.Source))
	put("factor", strconv.FormatFloat(h.ClockFactor, 'g', -1, 64))
	put("continues", h.Continues)
	for _, name := range h.Devices {
		put("device", name)
	}
	put("tensioner", h.Tensioner)
	put("band", h.Band)
	put("exercise", strconv.Itoa(h.Plan.Exercise))
	put("ramps", strconv.Itoa(h.Plan.Ramps))
	if h.Presses.As != "" {
		put("presses", h.Presses.text())
	}
	if h.Presses.Doubt != "" {
		put("press-doubt", h.Presses.Doubt)
	}
	if h.Bench != nil {
		h.Bench.appendTo(put)
	}
	for _, line := range bytes.Split(h.Profile, []byte{'\n'}) {
		dst = append(dst, profileTag...)
		dst = appendEscaped(dst, line)
		dst = append(dst, '\n')
	}
	return dst, nil
}

func checkHeader(h Header) error {
	switch {
	case h.Started.Year() < 0 || h.Started.Year() > 9999:
		return errors.New("its start has no four-digit year")
	case h.Source != Live && h.Source != Imported:
		return fmt.Errorf("its source is %q, not %q or %q", h.Source, Live, Imported)
	case !(h.ClockFactor > 0) || math.IsInf(h.ClockFactor, 0):
		return fmt.Errorf("its clock factor is %v, not above 0", h.ClockFactor)
	case h.Continues != "" && !isSeal(h.Continues):
		return fmt.Errorf("the file that it continues is named by %q, not by a seal", h.Continues)
	case len(h.Devices) == 0:
		return errors.New("it names no device")
	case h.Plan.Exercise < 0 || h.Plan.Ramps < 0:
		return errors.New("its plan has fewer than no cycles")
	}
	if err := h.Presses.check(); err != nil {
		return err
	}
	if h.Bench != nil {
		return h.Bench.check(h)
	}
	return nil
}

func parseProfile(text []byte) (*mill.Profile, error) {
	p, err := mill.Parse(text)
	if err != nil {
		return nil, fmt.Errorf("the profile inside the recording is refused: %w", err)
	}
	return p, nil
}

// isSeal reports whether text is a check sum as the file writes it.
func isSeal(text string) bool {
	sum, err := hex.DecodeString(text)
	return err == nil && len(sum) == 32 && hex.EncodeToString(sum) == text
}

// headerParser collects the lines of the header block.
type headerParser struct {
	h       Header
	kind    string
	bench   Bench
	presses Presses
	seen    map[string]bool
	profile [][]byte
}

// line takes one line after the magic, without its LF; the line is overwritten.
func (p *headerParser) line(line []byte) error {
	if text, ok := bytes.CutPrefix(line, []byte(profileTag)); ok {
		text, err := unescape(text)
		p.profile = append(p.profile, text)
		return err
	}
	field, ok := bytes.CutPrefix(line, []byte(headerTag))
	if !ok {
		return errors.New("a line of the header has no tag of SPEC 2")
	}
	key, text, ok := bytes.Cut(field, []byte{' '})
	if !ok || !isKind(key) {
		return errors.New("a line of the header is not a key and a value")
	}
	value, err := unescape(text)
	if err != nil {
		return err
	}
	if p.seen[string(key)] && string(key) != "device" {
		return fmt.Errorf("the header says %s twice", key)
	}
	p.seen[string(key)] = true
	return p.set(string(key), string(value))
}

// set takes one value; keys that it does not know are passed over (SPEC 4.2).
func (p *headerParser) set(key, value string) (err error) {
	h := &p.h
	switch key {
	case "program":
		h.Program = value
	case "started":
		h.Started, err = time.Parse(time.RFC3339Nano, value)
	case "source":
		h.Source = Source(value)
	case "factor":
		h.ClockFactor, err = strconv.ParseFloat(value, 64)
	case "continues":
		h.Continues = value
	case "device":
		h.Devices = append(h.Devices, value)
	case "tensioner":
		h.Tensioner = value
	case "band":
		h.Band = value
	case "exercise":
		h.Plan.Exercise, err = parseCount(value)
	case "ramps":
		h.Plan.Ramps, err = parseCount(value)
	case "kind":
		p.kind = value
	case "presses":
		p.presses, err = parsePresses(value)
	case "press-doubt":
		h.Presses.Doubt = value
	default:
		p.bench.set(key, value)
	}
	return err
}

func parseCount(value string) (int, error) {
	n, ok := parseNumber([]byte(value))
	if !ok || n > math.MaxInt32 {
		return 0, fmt.Errorf("the header counts %q cycles", value)
	}
	return int(n), nil
}

// header is what the lines said, if they said all.
func (p *headerParser) header() (Header, error) {
	for _, key := range []string{"program", "started", "source", "factor", "continues",
		"device", "tensioner", "band", "exercise", "ramps"} {
		if !p.seen[key] {
			return Header{}, fmt.Errorf("the header does not say %s", key)
		}
	}
	if len(p.profile) == 0 {
		return Header{}, errors.New("the header holds no profile")
	}
	p.h.Profile = bytes.Join(p.profile, []byte{'\n'})
	p.h.Presses.As, p.h.Presses.Marks = p.presses.As, p.presses.Marks
	switch p.kind {
	case kindVisit, "":
	case kindBench:
		p.h.Bench = &p.bench
	default:
		return Header{}, fmt.Errorf("it is a recording of kind %q, which this program does not know", p.kind)
	}
	return p.h, checkHeader(p.h)
}
