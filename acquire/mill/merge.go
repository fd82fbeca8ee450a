package mill

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// ParseInstruments reads an instrument record: a TOML text of [[instrument]]
// tables alone, as a bench test writes it. Errors as Parse.
func ParseInstruments(text []byte) ([]Instrument, error) {
	t, err := readTable(text, "instrument record")
	if err != nil {
		return nil, err
	}
	var all []Instrument
	for _, e := range t.list("instrument") {
		all = append(all, readInstrument(e))
	}
	t.needTable("instrument", "write at least one [[instrument]]")
	t.rest()
	checkNames(t.faults, &Profile{Instruments: all})
	return all, t.faults.err()
}

// MergeInstruments puts instrument records in the place of those of the same
// serial number in a profile, or of the same name where the record has no
// serial number, and adds those that it has not. It changes the text and
// nothing else in it, so that remarks stay; the names are those that were
// replaced or added. Errors as Parse, for the record and for the outcome.
func MergeInstruments(profile, record []byte) (merged []byte, names []string, err error) {
	fresh, err := ParseInstruments(record)
	if err != nil {
		return nil, nil, fmt.Errorf("instrument record: %w", err)
	}
	p, err := Parse(profile)
	if err != nil {
		return nil, nil, err
	}
	lines := strings.SplitAfter(string(profile), "\n")
	blocks := instrumentBlocks(string(profile), lines)
	if len(blocks) != len(p.Instruments) {
		return nil, nil, &ProfileError{Key: "instrument", Problem: "its tables stand in a list within one line", Hint: "write each under a [[instrument]] of its own"}
	}
	drop := make([]bool, len(lines))
	for _, i := range fresh {
		names = append(names, i.Name)
		for k, old := range p.Instruments {
			if i.sameAs(old) {
				for l := blocks[k][0]; l < blocks[k][1]; l++ {
					drop[l] = true
				}
			}
		}
	}
	var b strings.Builder
	for l, line := range lines {
		if !drop[l] {
			b.WriteString(line)
		}
	}
	text := strings.TrimRight(b.String(), "\n") + "\n\n" + strings.TrimLeft(string(EncodeInstruments(fresh)), "\n")
	if _, err := Parse([]byte(text)); err != nil {
		return nil, nil, fmt.Errorf("the profile with the instrument record in it: %w", err)
	}
	return []byte(text), names, nil
}

// sameAs tells whether a record speaks of an instrument.
func (i Instrument) sameAs(old Instrument) bool {
	if i.Serial != "" {
		return i.Serial == old.Serial
	}
	return i.Name == old.Name
}

// instrumentBlocks are the lines of each [[instrument]], 0-based, the end left
// out: from its header to the next header that is not its own, remarks before
// that one left to it.
func instrumentBlocks(text string, lines []string) [][2]int {
	heads := keyLines(strings.TrimPrefix(text, "\ufeff"))
	var starts []int // 1-based lines of all headers and of top keys
	for path, line := range heads {
		if parts := strings.Split(path, "."); len(parts) == 1 || len(parts) == 2 && isNumber(parts[1]) {
			starts = append(starts, line)
		}
	}
	slices.Sort(starts)
	var blocks [][2]int
	for k := 0; ; k++ {
		line, ok := heads["instrument."+strconv.Itoa(k)]
		if !ok {
			return blocks
		}
		end := len(lines)
		for _, s := range starts {
			if s > line {
				end = s - 1
				break
			}
		}
		for end > line && isRemark(lines[end-1]) {
			end--
		}
		blocks = append(blocks, [2]int{line - 1, end})
	}
}

func isRemark(line string) bool {
	line = strings.TrimSpace(line)
	return line == "" || line[0] == '#'
}

func isNumber(text string) bool { _, err := strconv.Atoi(text); return err == nil }

// EncodeInstruments writes instruments as [[instrument]] tables that Parse and
// ParseInstruments read back.
func EncodeInstruments(list []Instrument) []byte {
	var b strings.Builder
	put := func(key, value string) {
		if value != "" {
			fmt.Fprintf(&b, "%s = %s\n", key, strconv.Quote(value))
		}
	}
	for _, i := range list {
		b.WriteString("\n[[instrument]]\n")
		put("name", i.Name)
		put("serial", i.Serial)
		put("measures", i.Measures)
		put("limit", i.Limit.Entered)
		put("due", i.Due)
		put("range_low", i.Low.Entered)
		put("range_high", i.High.Entered)
		put("division", i.Division.Entered)
		put("revolution", i.Revolution.Entered)
		if i.Bench == nil {
			continue
		}
		b.WriteString("\n[instrument.bench]\n")
		put("checked", i.Bench.Checked)
		put("verdict", i.Bench.Verdict)
		put("judged_by", i.Bench.Limit)
		put("rule", i.Bench.Rule)
		put("recording", i.Bench.Seal)
		put("hysteresis", i.Bench.Hysteresis.Entered)
		for _, p := range i.Bench.Points {
			b.WriteString("\n[[instrument.bench.point]]\n")
			put("at", p.At.Entered)
			put("rising", p.Rising.Entered)
			put("falling", p.Falling.Entered)
			put("uncertainty", p.Uncertainty.Entered)
		}
	}
	return []byte(b.String())
}
