// Package report writes a result for people and for machines: Text for a
// terminal, HTML for one sheet of paper, CSV and JSON for other programs, SVG
// and PNG of the plots. Every figure comes from analyze; this room only
// converts units, rounds, words and draws. Same input, same bytes.
//
// Deliberately absent: files, clocks, and any formula of the trade. Wording
// and layout may change; the JSON follows result.schema.json, whose version
// number changes with it.
package report

import (
	"strings"
	"time"

	"tautramp/analyze"
	"tautramp/analyze/findings"
)

// Meta is what a report says of the recording and of the program, beside the
// figures. The zero value of a field means not known, and is printed so.
type Meta struct {
	File        string    // name of the recording; folders before it are dropped
	Seal        string    // last good seal, identifies the data
	Outcome     string    // "complete", "torn" or "corrupt", as reading the file ended; people read "whole", "end missing", "damaged"
	TailBytes   int64     // bytes after the last good seal, not used
	Program     string    // name and version of the program that computes the result
	Recorder    string    // name and version of the program that made the recording
	Started     time.Time // wall clock at the recording's start, with the zone it was written in; of an imported card, when it was imported
	Imported    bool      // the lines came from a card or text file: it carries no date
	ClockFactor float64   // recorded seconds per real second; 0 and 1 are real time, anything else is a rehearsal
	Continues   string    // seal of the file that this one continues
	Notes       []string  // what went wrong on the way: lost lines, restarts, clocks

	Found *findings.Report // what is wrong with the tensioner; nil where nobody looked

	Before     *findings.Comparison // condition found against left; nil where it was not asked for
	BeforeFile string               // the recording of the condition found

	CautionsShown bool // the reader of Text has had the cautions on the same screen: they are not repeated there
}

// scaled tells a recording made on a scaled clock.
func (m Meta) scaled() bool { return m.ClockFactor != 0 && m.ClockFactor != 1 }

// rehearsed tells that nothing was measured on a mill: a device said so itself,
// or the clock was scaled.
func rehearsed(r *analyze.Result, m Meta) bool { return r.Simulated || m.scaled() }

// base is the file's name without folders, whichever way they are written.
func (m Meta) base() string {
	return clean(m.File[strings.LastIndexAny(m.File, `/\`)+1:], nameLength)
}

// seal is the whole seal, or why there is none: cut short it would not identify
// the data.
func (m Meta) seal() string {
	if s := clean(m.Seal, sealLength); s != "" {
		return s
	}
	return notKnown + ": the recording has none"
}
