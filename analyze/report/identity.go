package report

import (
	"fmt"
	"strconv"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// rehearsalText says that nothing here was measured on a mill, if so.
func rehearsalText(r *analyze.Result, m Meta) string {
	var why []string
	if r.Simulated {
		why = append(why, "a device says that what it measures is made up")
	}
	if m.scaled() {
		why = append(why, fmt.Sprintf("the clock was scaled, %s recorded seconds in one real second", plain(m.ClockFactor, 3)))
	}
	if len(why) == 0 {
		return ""
	}
	return "REHEARSAL: " + strings.Join(why, ", and ") + ". These are no readings of a mill: set no tensioner by them."
}

func identity(r *analyze.Result, m Meta, u units) []fact {
	facts := []fact{
		{"Mill", named(r.Setup.Mill.Name, notKnown+": the profile names no mill")},
		{"Serviced by", named(r.Setup.Mill.ServicedBy, notKnown+": the profile does not say")},
		{"Tensioner", noted(named(r.Setup.Tensioner.Name, "of no name")+", set by "+u.settingIs.noun, r.Setup.Tensioner.Note)},
		{"Band", noted(bandText(r.Setup.Band, u), r.Setup.Band.Note)},
		{"Rig", noted(lengthText(r.Setup.Rig.GaugeLength, u.section)+" gauge length", r.Setup.Rig.Note)},
		{"Measured", startedText(m)},
		{"Cycles", cyclesText(r)},
		{"Recording", recordingText(r, m)},
		{"Seal", m.seal()},
		{"Computed by", named(m.Program, notKnown)},
	}
	if m.Recorder != "" && m.Recorder != m.Program {
		facts = append(facts, fact{"Recorded by", clean(m.Recorder, nameLength)})
	}
	if m.Continues != "" {
		facts = append(facts, fact{"Continues", "the recording with seal " + clean(m.Continues, sealLength)})
	}
	return facts
}

// noted puts the profile's remark behind a text.
func noted(text, note string) string {
	if note = clean(note, textLength); note != "" {
		text += "; " + note
	}
	return text
}

func bandText(b mill.Band, u units) string {
	return fmt.Sprintf("%s, %s net (back to gullet bottom) x %s thick",
		named(b.Name, "of no name"), lengthText(b.NetWidth, u.section), lengthText(b.Thickness, u.section))
}

// lengthText is a length of the profile in the report's unit, with the digits
// that a person would write.
func lengthText(l mill.Length, u unit) string {
	if l.SI <= 0 {
		return notKnown
	}
	return u.with(plain(u.show(l.SI), 4))
}

func startedText(m Meta) string {
	const layout = "2006-01-02 15:04 -07:00"
	switch {
	case m.Imported && m.Started.IsZero():
		return notKnown + ": the card carries no date"
	case m.Imported:
		return notKnown + ": the card carries no date; imported " + m.Started.Format(layout)
	case m.Started.IsZero():
		return notKnown + ": the recording states no time"
	}
	return m.Started.Format(layout)
}

func cyclesText(r *analyze.Result) string {
	count := map[analyze.Role]int{}
	for _, c := range r.Cycles {
		count[c.Role]++
	}
	text := strconv.Itoa(count[analyze.Ramp]) + " fitted"
	if n := count[analyze.Exercise]; n > 0 {
		text += fmt.Sprintf(", %d to exercise (not fitted)", n)
	}
	if n := count[analyze.Incomplete]; n > 0 {
		text += fmt.Sprintf(", %d not closed (not fitted)", n)
	}
	return text
}

// recordingText is the file, how it ends, and how the visit did.
func recordingText(r *analyze.Result, m Meta) string {
	text := m.base()
	if text == "" {
		text = "name " + notKnown
	}
	text += ", " + outcomeText(m.Outcome)
	if m.TailBytes > 0 {
		text += fmt.Sprintf(": the last %d bytes carry no seal and were not used", m.TailBytes)
	}
	if ended := clean(r.Ended, textLength); ended != "" {
		text += "; " + ended
	}
	return text
}

// outcomeText is how reading the file ended, for people.
func outcomeText(outcome string) string {
	switch outcome {
	case "complete":
		return "whole"
	case "torn":
		return "end missing"
	case "corrupt":
		return "damaged"
	case "":
		return "how it ends is " + notKnown
	}
	return clean(outcome, nameLength)
}

// fileWarnings are what the file itself makes doubtful.
func fileWarnings(m Meta) []analyze.Warning {
	unused := "what came after the last good seal is not used"
	if m.TailBytes > 0 {
		unused = fmt.Sprintf("%d bytes after the last good seal are not used", m.TailBytes)
	}
	unused += ", and ramps after that are not in this result."
	switch m.Outcome {
	case "torn":
		return []analyze.Warning{{Code: "end-missing", Text: "The end of the recording is missing: " + unused}}
	case "corrupt":
		return []analyze.Warning{{Code: "recording-damaged", Text: "The recording was altered or damaged: " + unused}}
	}
	return nil
}

// allWarnings are those of the file, then those of the analysis.
func allWarnings(r *analyze.Result, m Meta) []analyze.Warning {
	return append(fileWarnings(m), r.Warnings...)
}

// warningTexts are all warnings, then the notes of the way.
func warningTexts(r *analyze.Result, m Meta) []string {
	var texts []string
	for _, w := range allWarnings(r, m) {
		texts = append(texts, clean(w.Text, textLength))
	}
	for _, n := range m.Notes {
		texts = append(texts, clean(n, textLength))
	}
	return bounded(texts)
}

// bounded drops repeats and cuts a list that would bury the sheet, and says how
// much was cut.
func bounded(texts []string) []string {
	seen := map[string]bool{"": true}
	var kept []string
	for _, t := range texts {
		if !seen[t] {
			seen[t] = true
			kept = append(kept, t)
		}
	}
	if over := len(kept) - listLength; over > 0 {
		kept = append(kept[:listLength], fmt.Sprintf("and %d more, in the JSON", over))
	}
	return kept
}
