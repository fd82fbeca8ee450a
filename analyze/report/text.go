package report

import (
	"bufio"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// columns is the width of a terminal that every line fits.
const columns = 80

// Text writes the result for a terminal: plain words, at most 80 columns, no
// colour. The error is the writer's.
func Text(w io.Writer, r *analyze.Result, m Meta, s mill.System) error {
	p := &printer{w: bufio.NewWriter(w)}
	sh := newSheet(r, m, s)
	p.para(0, sh.Rehearsal)
	p.para(0, sh.Title)
	p.para(0, sh.Predicted)
	p.facts(sh.Identity)
	p.targets(sh)
	p.friction(sh)
	p.before(sh.Before)
	p.found(sh.Found)
	p.heading("Running band")
	p.para(2, sh.RunningNote)
	p.facts(sh.Running)
	p.heading("Band stress at round settings")
	p.table(sh)
	if len(sh.Bands) > 0 {
		p.heading("Bands on file, on this tensioner")
		p.facts(sh.Bands)
	}
	p.heading("What this rests on")
	p.facts(sh.Assumptions)
	p.facts(sh.Instruments)
	p.facts(sh.Fitted)
	p.budget("Doubt in the rising setting, standard", sh.Budget)
	p.budget("Doubt in the half-width, standard", sh.HalfBudget)
	p.budget("Doubt in F0, standard", sh.F0Budget)
	p.list("Warnings", sh.Warnings)
	p.list("Not checked", sh.Unchecked)
	if m.CautionsShown {
		sh.Cautions = []string{"As shown at the start: they hold for all work on the band, not for this visit alone."}
	}
	p.list("Cautions", sh.Cautions)
	p.answer(sh)
	return p.w.Flush()
}

// printer lays text out; bufio keeps the first error until Flush.
type printer struct{ w *bufio.Writer }

func (p *printer) line(text string) {
	p.w.WriteString(strings.TrimRight(text, " "))
	p.w.WriteByte('\n')
}

func (p *printer) heading(text string) {
	p.line("")
	p.line(strings.ToUpper(text))
}

// para writes a text wrapped at an indent; an empty one writes nothing.
func (p *printer) para(indent int, text string) {
	if text == "" {
		return
	}
	for _, l := range wrap(text, columns-indent) {
		p.line(strings.Repeat(" ", indent) + l)
	}
}

// labelColumns is the width of the labels of facts.
const labelColumns = 28

// facts writes labels left and values right, wrapped into their column.
func (p *printer) facts(facts []fact) {
	for _, f := range facts {
		label, value := wrap(f.Label, labelColumns-2), wrap(f.Value, columns-labelColumns-2)
		for i := range max(len(label), len(value)) {
			p.line(fmt.Sprintf("  %-*s%s", labelColumns, at(label, i), at(value, i)))
		}
	}
}

func at(lines []string, i int) string {
	if i < len(lines) {
		return lines[i]
	}
	return ""
}

func (p *printer) targets(sh sheet) {
	p.heading("Setting for the target")
	p.facts([]fact{{"band stress wanted", sh.TargetText}})
	if sh.NoTarget != "" {
		p.facts([]fact{{"set to", notKnown + ": " + sh.NoTarget}, {"never above", sh.Limit}})
		return
	}
	for _, a := range sh.Targets {
		p.line("")
		p.para(2, strings.ToUpper(string(a.Direction))+": "+a.How+".")
		p.facts([]fact{{"set to", a.Set.short()}})
		if a.Shown != "" {
			p.facts([]fact{{"which the mill shows as", a.Shown}})
		}
		for _, i := range a.Intervals {
			p.facts([]fact{{i.Name, intervalText(i)}})
		}
	}
	p.line("")
	p.para(2, sh.Overshoot)
	p.facts([]fact{{"never above", sh.Limit}})
}

// answer repeats what the visit was for, so that it stands at the bottom of the
// screen.
func (p *printer) answer(sh sheet) {
	p.heading("In short")
	if sh.Rehearsal != "" {
		p.para(2, "REHEARSAL: set no tensioner by this.")
	}
	if sh.NoTarget != "" {
		p.short("SET TO", notKnown+": "+sh.NoTarget)
	} else {
		for i, from := range []string{", come up from below", ", come down from above"} {
			text := sh.Targets[i].Set.short()
			switch {
			case sh.Targets[i].Set.Why != "":
			case sh.Targets[i].Shown != "":
				text += from + "; " + sh.Targets[i].Shown
			case sh.Targets[i].NoSetting:
				text += " to loosen, not to set by"
			default:
				text += from
			}
			p.short(strings.ToUpper(string(sh.Targets[i].Direction)), text)
		}
	}
	p.short("NEVER ABOVE", sh.Limit)
	grade := sh.Verdict.Word
	if n := len(sh.Warnings); n > 0 {
		grade += fmt.Sprintf("; %d warnings above", n)
	}
	p.short("FOUND", sh.Found.short())
	p.short("GRADE", strings.Replace(grade, " 1 warnings", " 1 warning", 1))
}

// short is a line of the answer; a long value is wrapped.
func (p *printer) short(label, value string) {
	const labelWidth = 14
	lines := wrap(value, columns-labelWidth-2)
	for i, l := range lines {
		p.line(fmt.Sprintf("  %-*s%s", labelWidth, map[bool]string{true: label}[i == 0], l))
	}
}

func intervalText(i interval) string {
	if i.Why != "" || i.PlusMinus == "" {
		return i.String()
	}
	return fmt.Sprintf("%s, 95 %% from %s to %s", i.String(), i.Low, i.High)
}

func (p *printer) friction(sh sheet) {
	p.heading("Friction")
	p.facts([]fact{{"Grade", sh.Verdict.Word + ": " + sh.Verdict.Says}})
	p.facts(sh.Friction)
	if sh.Drivetrain.Title != "" {
		p.heading(sh.Drivetrain.Title)
		p.facts(sh.Drivetrain.Facts)
	}
	p.heading("Both lines")
	p.facts(sh.Branches)
}

// budget lists what makes a figure doubtful; nothing where it is unknown.
func (p *printer) budget(heading string, lines []budgetLine) {
	if len(lines) == 0 {
		return
	}
	p.heading(heading)
	for _, b := range lines {
		p.facts([]fact{{b.Name, strings.TrimSuffix(b.Std+", "+b.From, ", ")}})
	}
}

// table writes the round settings; an unknown figure is a note, not a number.
func (p *printer) table(sh sheet) {
	if sh.Table.Why != "" {
		p.para(2, notKnown+": "+sh.Table.Why)
		return
	}
	const row = "  %16s  %26s  %26s"
	p.line(fmt.Sprintf(row, "setting", "rising (come up)", "falling (come down)"))
	p.line(fmt.Sprintf(row, sh.Units.setting.name, sh.Units.stress.name, sh.Units.stress.name))
	for _, r := range sh.Table.Rows {
		p.line(fmt.Sprintf(row, r.Setting, cell(r.Rising), cell(r.Falling)))
	}
	p.para(2, "+/- is half of the 95 % interval of the band's true stress. "+cellNote(sh.Table.Rows))
}

// cell is a figure in a narrow column.
func cell(f figure) string {
	switch {
	case f.Why != "":
		return notKnown + "*"
	case f.PlusMinus == "":
		return f.Value
	}
	return f.Value + " +/- " + f.PlusMinus
}

// cellNote explains the stars of a table.
func cellNote(rows []roundRow) string {
	var whys []string
	for _, r := range rows {
		whys = append(whys, r.Rising.Why, r.Falling.Why)
	}
	if whys = bounded(whys); len(whys) == 0 {
		return ""
	}
	return "* " + notKnown + ": " + strings.Join(whys, "; ") + "."
}

func (p *printer) list(heading string, items []string) {
	if len(items) == 0 {
		return
	}
	p.heading(heading)
	for _, item := range items {
		for i, l := range wrap(item, columns-4) {
			p.line(map[bool]string{true: "  - ", false: "    "}[i == 0] + l)
		}
	}
}

// wrap breaks text at spaces into lines of at most width characters; a longer
// word is cut.
func wrap(text string, width int) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		for utf8.RuneCountInString(word) > width {
			if line != "" {
				lines, line = append(lines, line), ""
			}
			runes := []rune(word)
			lines, word = append(lines, string(runes[:width])), string(runes[width:])
		}
		switch {
		case line == "":
			line = word
		case utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > width:
			lines, line = append(lines, line), word
		default:
			line += " " + word
		}
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}
