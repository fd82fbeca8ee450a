package report

import (
	"fmt"
	"math"
	"strings"

	"tautramp/analyze/estimate"
	"tautramp/analyze/findings"
)

// foundText is one finding in words.
type foundText struct {
	Number   int
	Name     string // what is wrong
	Which    string // the causes, where they are not the name itself
	Word     string // "high certainty, service"
	Level    string
	Seen     string // where in the loop; "" nowhere
	Severity string
	Evidence []string
	Facts    []fact // ruled out, not ruled out, next measurement
	Advice   []string
}

// foundSheet is the findings in words.
type foundSheet struct {
	Looked bool
	None   string // where there is none
	List   []foundText
	Open   []fact   // what the recording cannot show
	Clear  string   // what was looked for and not found
	Own    []string // thresholds that are the mill's own
	Note   string   // what certainty means
}

// certaintyNote says what the words of certainty are worth.
func certaintyNote() string {
	return "High, likely and possible were counted on simulated rigs with planted faults. They are no chances on a real mill."
}

func foundOf(rep *findings.Report, u units) foundSheet {
	if rep == nil {
		return foundSheet{}
	}
	s := foundSheet{Looked: true, Note: certaintyNote()}
	for i, f := range rep.Findings {
		s.List = append(s.List, findingText(i+1, f, u))
	}
	if len(s.List) == 0 {
		s.None = "Nothing of what this recording can show."
		if len(rep.Open) > 0 {
			s.None += " What it cannot show stands below."
		}
	}
	for _, o := range rep.Open {
		s.Open = append(s.Open, fact{sentence(causeNames(o.Causes)), clean(o.Why, textLength)})
	}
	s.Clear = causeNames(rep.Clear)
	for _, o := range rep.Own {
		s.Own = append(s.Own, fmt.Sprintf("%s is this mill's own limit: %s in place of %s", clean(string(o.Key), nameLength), plain(o.Value, 4), plain(o.Table, 4)))
	}
	return s
}

func findingText(n int, f findings.Finding, u units) foundText {
	t := foundText{
		Number: n, Name: clean(f.Name, nameLength), Level: string(f.Level),
		Word: string(f.Word) + " certainty, " + string(f.Level), Severity: severityText(f),
	}
	if f.Region.Words != "" {
		t.Seen = clean(f.Region.Words, nameLength)
		if finite(f.Region.LowSI) {
			t.Seen += fmt.Sprintf(", box %d on the loop", n)
		}
	}
	t.Which = whichText(f.Causes)
	for _, e := range f.Evidence {
		t.Evidence = append(t.Evidence, evidenceText(e, u))
	}
	add := func(label string, list []string) {
		if len(list) > 0 {
			t.Facts = append(t.Facts, fact{label, clean(strings.Join(list, "; "), textLength)})
		}
	}
	add("ruled out", f.RuledOut)
	add("not ruled out", f.NotRuled)
	add("measure next", []string{f.Next})
	for _, a := range f.Advice {
		t.Advice = append(t.Advice, clean(a, textLength))
	}
	return t
}

func causeNames(causes []findings.Cause) string {
	names := make([]string, len(causes))
	for i, c := range causes {
		names[i] = c.Name
	}
	return clean(strings.Join(names, "; "), textLength)
}

func sentence(text string) string {
	if text == "" {
		return ""
	}
	return strings.ToUpper(text[:1]) + text[1:]
}

// whichText names the causes of a group.
func whichText(causes []findings.Cause) string {
	if len(causes) < 2 {
		return ""
	}
	names := make([]string, len(causes))
	for i, c := range causes {
		names[i] = c.Name
	}
	last := len(names) - 1
	return clean(strings.Join(names[:last], ", ")+" or "+names[last]+": this recording cannot tell which", textLength)
}

func severityText(f findings.Finding) string {
	text := ""
	if finite(f.Times) && f.Times < 1000 {
		text = plain(f.Times, 2) + " times the limit"
	}
	if f.Share.Known() && finite(f.Share.Value) {
		if text != "" {
			text += "; "
		}
		of := "working setting"
		if len(f.Evidence) > 0 && f.Evidence[0].In == findings.OfStretch {
			of = "stretch at the working setting"
		}
		text += plain(100*f.Share.Value, 2) + " % of the " + of
	}
	return text
}

// evidenceText is one figure against its limit: "half-width of the loop at the
// working setting: 52 gauge psi = 7.2 +/- 0.6 % of 724 gauge psi (limit: above
// 6 %)".
func evidenceText(e findings.Evidence, u units) string {
	text := e.Name + ": " + measureText(e.Feature, u)
	switch e.Relation {
	case findings.Above, findings.Below:
		text += fmt.Sprintf(" (limit: %s %s)", e.Relation, limitValue(e.In, e.Limit, u))
	}
	return clean(text, textLength)
}

func measureText(f findings.Feature, u units) string {
	e := f.Is
	if why := unknownWhy(e); why != "" {
		return notKnown + ": " + why
	}
	share := spread(e, percent())
	switch f.In {
	case findings.OfSetting:
		if f.OfSI > 0 {
			return fmt.Sprintf("%s = %s of %s", roundedWith(u.setting, e, f.OfSI), share, u.setting.with(plain(u.setting.show(f.OfSI), 3)))
		}
	case findings.OfStretch:
		if f.OfSI > 0 {
			return fmt.Sprintf("%s = %s of %s", roundedWith(u.extension, e, f.OfSI), share, u.extension.with(plain(u.extension.show(f.OfSI), 3)))
		}
	case findings.PerMinute:
		return share + " a minute"
	case findings.PerSecond:
		return spread(e, unit{"% a second", 0.01})
	case findings.MetresMinute:
		return spread(e, unit{u.extension.name + " a minute", u.extension.factor})
	case findings.Seconds:
		return spread(e, unit{"s", 1})
	case findings.Times, findings.Count:
		return spread(e, bare())
	}
	return share
}

// roundedWith is a share as what it is a share of.
func roundedWith(in unit, e estimate.Estimate, of float64) string {
	f := figureOf(e.Scale(of), in)
	return in.with(f.Value)
}

// spread is a figure with its interval where it has one.
func spread(e estimate.Estimate, in unit) string {
	f := figureOf(e, in)
	if f.PlusMinus == "" {
		return in.with(f.Value)
	}
	return f.String()
}

func limitValue(m findings.Measure, limit float64, u units) string {
	switch m {
	case findings.Share, findings.OfSetting, findings.OfStretch:
		return plain(100*limit, 3) + " %"
	case findings.PerMinute:
		return plain(100*limit, 3) + " % a minute"
	case findings.PerSecond:
		return plain(100*limit, 3) + " % a second"
	case findings.MetresMinute:
		return u.extension.with(plain(u.extension.show(limit), 2)) + " a minute"
	case findings.Seconds:
		return plain(limit, 3) + " s"
	}
	return plain(limit, 3)
}

// shortFound is the findings in one line, for the end of the screen.
func (s foundSheet) short() string {
	switch {
	case !s.Looked:
		return ""
	case len(s.List) == 0:
		return s.None
	}
	var parts []string
	for _, f := range s.List {
		parts = append(parts, fmt.Sprintf("%d. %s (%s)", f.Number, f.Name, f.Word))
	}
	return strings.Join(parts, "; ")
}

// printFound writes the findings for a terminal.
func (p *printer) found(s foundSheet) {
	if !s.Looked {
		return
	}
	p.heading("What was found")
	p.para(2, s.None)
	for _, f := range s.List {
		p.line("")
		p.para(2, fmt.Sprintf("%d. %s: %s", f.Number, strings.ToUpper(f.Name), f.Word))
		p.para(5, f.Which)
		for _, e := range f.Evidence {
			p.hang(5, "- ", e)
		}
		facts := []fact{{"how bad", f.Severity}, {"seen at", f.Seen}}
		for _, x := range append(facts, f.Facts...) {
			if x.Value != "" {
				p.hang(5, x.Label+": ", x.Value)
			}
		}
		for i, a := range f.Advice {
			p.hang(5, fmt.Sprintf("%c) ", 'a'+i), a)
		}
	}
	if len(s.List) > 0 {
		p.line("")
		p.para(2, s.Note)
	}
	if s.Clear != "" {
		p.line("")
		p.hang(2, "Looked for and not found: ", s.Clear)
	}
	p.list("Cannot be told from this recording", openLines(s.Open))
	p.list("Limits of this mill's own", s.Own)
}

func openLines(open []fact) []string {
	var out []string
	for _, o := range open {
		out = append(out, o.Label+": "+o.Value)
	}
	return out
}

// hang writes a text behind a mark, its further lines set in by as much as a
// short mark takes.
func (p *printer) hang(indent int, mark, text string) {
	in := indent + min(len(mark), 3)
	for i, l := range wrap(mark+text, columns-in) {
		p.line(strings.Repeat(" ", map[bool]int{true: indent, false: in}[i == 0]) + l)
	}
}

// spot is where a finding is seen on the loop, in display units.
type spot struct {
	number         int
	x0, x1, y0, y1 float64
}

// boxesOf is where the findings are seen, in the stress of the loop, or in its
// stretch where the stress is not known.
func boxesOf(rep *findings.Report, u units, inStretch bool) []spot {
	if rep == nil {
		return nil
	}
	var out []spot
	for i, f := range rep.Findings {
		r := f.Region
		b := spot{i + 1, u.setting.show(r.LowSI), u.setting.show(r.HighSI), u.stress.show(r.LowPa), u.stress.show(r.HighPa)}
		if inStretch {
			b.y0, b.y1 = u.extension.show(r.LowM), u.extension.show(r.HighM)
		}
		if finite(b.x0) && finite(b.x1) && finite(b.y0) && finite(b.y1) && !math.Signbit(b.x1-b.x0) {
			out = append(out, b)
		}
	}
	return out
}
