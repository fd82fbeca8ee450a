package report

import (
	"bytes"
	"encoding/csv"
	"slices"
	"strings"
	"testing"
	"unicode/utf8"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// hostile puts marks of every language it may end up in into each text that
// comes from the profile, a device or a file.
func hostile(t testing.TB) (*analyze.Result, Meta) {
	t.Helper()
	const evil = "<script>alert(1)</script>\"'&;=1+1\x1b[2J\u202E\r\n]]>"
	long := evil + strings.Repeat("wide ", 900) + strings.Repeat("x", 900)
	r := t1(t)
	r.Setup.Mill.Name, r.Setup.Mill.ServicedBy = long, long
	r.Setup.Tensioner.Name, r.Setup.Tensioner.Note = long, long
	r.Setup.Band.Name, r.Setup.Band.Note = "=cmd|' /C calc'!A0"+long, long
	r.Setup.Rig.Material, r.Setup.Rig.Note = long, long
	for i := range r.Cycles {
		r.Cycles[i].ZeroFrom = long
	}
	for range 2 * listLength {
		r.Warnings = append(r.Warnings, analyze.Warning{Code: long, Text: long})
	}
	m := t1Meta()
	m.File, m.Seal, m.Outcome, m.Program, m.Recorder, m.Continues = "../../"+long, long, long, long, evil, long
	for i := range 2 * listLength {
		m.Notes = append(m.Notes, strings.Repeat("n", i+1)+evil)
	}
	return r, m
}

func TestTextFitsEightyColumns(t *testing.T) {
	evil, evilMeta := hostile(t)
	meta := t1Meta()
	meta.ClockFactor, meta.TailBytes, meta.Outcome = 60, 511, "torn"
	for name, c := range map[string]struct {
		r *analyze.Result
		m Meta
	}{"T-1": {t1(t), meta}, "nothing": {blank(mill.SetByTurns), Meta{}}, "hostile": {evil, evilMeta}} {
		for _, s := range []mill.System{mill.US, mill.SI} {
			out := string(written(t, func(b *bytes.Buffer) error { return Text(b, c.r, c.m, s) }))
			for i, line := range strings.Split(out, "\n") {
				if n := utf8.RuneCountInString(line); n > columns {
					t.Errorf("%s %s: line %d has %d columns: %s", name, s, i+1, n, line)
				}
				if strings.ContainsAny(line, "\x1b\r\t") {
					t.Errorf("%s %s: line %d holds a control character: %q", name, s, i+1, line)
				}
			}
			if len(out) > 200_000 {
				t.Errorf("%s %s: %d bytes", name, s, len(out))
			}
		}
	}
}

func TestTextSaysWhatMatters(t *testing.T) {
	m := t1Meta()
	m.ClockFactor, m.TailBytes, m.Outcome = 60, 511, "torn"
	out := joined(string(written(t, func(b *bytes.Buffer) error { return Text(b, t1(t), m, mill.US) })))
	for _, want := range []string{
		"REHEARSAL: the clock was scaled, 60 recorded seconds", "end missing: the last 511 bytes carry no seal and were not used", "The end of the recording is missing: 511 bytes after the last good seal are not used, and ramps after that are not in this result.",
		"RISING: come up to it from below", "FALLING: come down to it from above", "this visit's curve", "next time you set it",
		"Overshot while rising: drop to 5", "never above 950 gauge psi", "service", "F0, friction that is 209 +/- 34 lbf always there", "mu, friction in proportion 0.0454 +/- 0.0010 to load", "W, lifted weight",
		"A*, working area", "is not added to them", "Set rising, may drift by 0 to +1,7", "at the target", "5.25 in net (back to gullet bottom)", "9,500 band psi",
		t1Meta().Seal[:48], "slack band", "3 fitted, 1 to exercise (not fitted)", "3 lines lost", "NOT CHECKED", "CAUTIONS",
	} {
		if !strings.Contains(out, want) {
			t.Errorf("lacks %q", want)
		}
	}
	si := joined(string(written(t, func(b *bytes.Buffer) error { return Text(b, t1(t), t1Meta(), mill.SI) })))
	for _, want := range []string{"gauge bar", "65.5 band MPa", "133.3 mm net", "kN", "508 mm gauge length"} {
		if !strings.Contains(si, want) {
			t.Errorf("SI lacks %q", want)
		}
	}
	for _, bad := range []string{"psi", " lbf", "REHEARSAL"} {
		if strings.Contains(strings.ReplaceAll(si, "100 psi (7 bar)", ""), bad) {
			t.Errorf("SI in real time has %q", bad)
		}
	}
}

// The setting of T-1 for 9,500 psi is 724 psi rising and 621 psi falling: the
// force balance of the invented tensioner, exact.
func TestSheetCarriesTheSettingsOfT1(t *testing.T) {
	out := joined(string(written(t, func(b *bytes.Buffer) error { return Text(b, t1(t), t1Meta(), mill.US) })))
	for _, d := range []struct {
		direction string
		low, high string
	}{{"RISING", "717", "731"}, {"FALLING", "615", "627"}} { // 1 %
		_, after, _ := strings.Cut(out, d.direction+":")
		_, after, _ = strings.Cut(after, "set to ")
		number, _, _ := strings.Cut(after, " ")
		if number < d.low || number > d.high || len(number) != 3 {
			t.Errorf("%s: set to %s, want within %s to %s", d.direction, number, d.low, d.high)
		}
	}
}

func TestRowsComeFromTheAnalysis(t *testing.T) {
	r := t1(t)
	u := unitsFor(r.Setup.Tensioner, mill.US)
	rows := rowsOf(r, u).Rows
	if len(rows) < 6 || len(rows) > maxRows {
		t.Fatalf("%d rows", len(rows))
	}
	for i, row := range rows {
		want, err := r.StressAt(analyze.Rising, row.SettingSI)
		if err != nil && row.Rising.Why != outsideRange {
			t.Errorf("row %d: %v, printed %q", i, err, row.Rising)
		}
		if err == nil && row.Rising != figureOf(want, u.stress) {
			t.Errorf("row %d: %v, want %v", i, row.Rising, figureOf(want, u.stress))
		}
		if i > 0 && row.SettingSI <= rows[i-1].SettingSI {
			t.Errorf("row %d does not rise", i)
		}
	}
}

func TestCSVIsATable(t *testing.T) {
	evil, evilMeta := hostile(t)
	for name, c := range map[string]struct {
		r *analyze.Result
		m Meta
	}{"T-1": {t1(t), t1Meta()}, "nothing": {blank(mill.SetByTorque), Meta{}}, "hostile": {evil, evilMeta}} {
		out := written(t, func(b *bytes.Buffer) error { return CSV(b, c.r, c.m, mill.US) })
		rows, err := csv.NewReader(bytes.NewReader(out)).ReadAll()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for i := range len(rows[0]) {
			if strings.ContainsFunc(rows[0][i], func(r rune) bool { return r > '~' || r < ' ' }) {
				t.Errorf("%s: heading %q is not ASCII", name, rows[0][i])
			}
		}
		for _, row := range rows[1:] {
			for _, cell := range row {
				if cell == "" || strings.ContainsAny(cell[:1], "=+@") {
					t.Errorf("%s: cell %q", name, cell)
				}
			}
		}
	}
}

func TestSealIsNeverCutShort(t *testing.T) {
	m := t1Meta()
	for name, write := range writers(mill.US, m) {
		out := string(written(t, func(b *bytes.Buffer) error { return write(b, t1(t)) }))
		if has := strings.Contains(strings.Join(strings.Fields(out), ""), m.Seal); !has && slices.Contains([]string{"text", "html", "csv", "json"}, name) {
			t.Errorf("%s lacks the whole seal", name)
		}
	}
}

func TestPairsAreAllThere(t *testing.T) {
	r := t1(t)
	rows, err := csv.NewReader(bytes.NewReader(written(t, func(b *bytes.Buffer) error { return PairsCSV(b, r, mill.SI) }))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(rows) != len(r.Points)+1 || len(r.Points) == 0 {
		t.Errorf("%d rows for %d pairs", len(rows)-1, len(r.Points))
	}
	if !slices.Equal(rows[0], []string{"time (s)", "setting (gauge bar)", "stretch as indicated (mm)", "band stress (band MPa)", "phase", "cycle", "fitted"}) {
		t.Errorf("headings %q", rows[0])
	}
}
