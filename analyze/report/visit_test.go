package report

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

func textOf(t testing.TB, r *analyze.Result, m Meta, s mill.System) string {
	t.Helper()
	return string(written(t, func(b *bytes.Buffer) error { return Text(b, r, m, s) }))
}

// A rehearsal must not look like a mill, whatever clock it ran on.
func TestRehearsalIsSaidForEitherReason(t *testing.T) {
	const made, scaled = "a device says that what it measures is made up", "the clock was scaled, 60 recorded seconds in one real second"
	r := t1(t)
	for _, c := range []struct {
		simulated bool
		factor    float64
		want      []string
	}{
		{false, 1, nil}, {false, 0, nil}, {true, 1, []string{made}}, {false, 60, []string{scaled}}, {true, 60, []string{made, scaled}},
	} {
		m := t1Meta()
		r.Simulated, m.ClockFactor = c.simulated, c.factor
		for _, name := range []string{"text", "html", "loop", "json", "csv"} {
			out := joined(string(written(t, func(b *bytes.Buffer) error { return writers(mill.US, m)[name](b, r) })))
			has := strings.Contains(out, "REHEARSAL")
			switch name {
			case "json":
				has = strings.Contains(out, `"rehearsal": true`)
			case "csv":
				has = strings.Contains(out, ",true") && !strings.Contains(out, ",false")
			case "loop": // a picture alone knows nothing of the clock
				if has != c.simulated {
					t.Errorf("%+v: picture says REHEARSAL: %v", c, has)
				}
				continue
			default:
				for _, why := range []string{made, scaled} {
					if strings.Contains(out, why) != (strings.Contains(strings.Join(c.want, "|"), why)) {
						t.Errorf("%+v: %s, %q", c, name, why)
					}
				}
			}
			if has != (len(c.want) > 0) {
				t.Errorf("%+v: %s says rehearsal: %v", c, name, has)
			}
		}
	}
}

func TestImportedCardHasNoDate(t *testing.T) {
	m := t1Meta()
	m.Imported = true
	want := "not known: the card carries no date; imported 2026-09-14 09:41"
	for name, out := range map[string]string{"text": textOf(t, t1(t), m, mill.US), "html": htmlOf(t, t1(t), m, mill.US)} {
		if !strings.Contains(joined(out), want) {
			t.Errorf("%s lacks %q", name, want)
		}
	}
	if got := decoded(t, t1(t), m)["recording"].(map[string]any)["imported"]; got != true {
		t.Errorf("imported: %v", got)
	}
}

func TestFileAndVisitSayHowTheyEnded(t *testing.T) {
	r := t1(t)
	for _, c := range []struct {
		outcome string
		tail    int64
		ended   string
		says    string
		code    string
		warning string
	}{
		{"complete", 0, "all planned cycles were closed", "quillfern-t1.ramp, whole; all planned cycles were closed", "", ""},
		{"complete", 0, "stopped by the operator after 1 of 4 cycles", "whole; stopped by the operator after 1 of 4 cycles", "", ""},
		{"torn", 511, "", "end missing: the last 511 bytes", "end-missing", "511 bytes after the last good seal are not used, and ramps after that are not in this result"},
		{"torn", 0, "", "end missing", "end-missing", "what came after the last good seal is not used"},
		{"corrupt", 9, "", "damaged: the last 9 bytes", "recording-damaged", "9 bytes after the last good seal are not used"},
	} {
		m := t1Meta()
		r.Ended, m.Outcome, m.TailBytes = c.ended, c.outcome, c.tail
		if out := joined(textOf(t, r, m, mill.US)); !strings.Contains(out, c.says) || !strings.Contains(out, c.warning) {
			t.Errorf("%s: lacks %q or %q", c.outcome, c.says, c.warning)
		}
		out := decoded(t, r, m)
		code := ""
		if first := out["warnings"].([]any)[0].(map[string]any); strings.Contains(first["text"].(string), "last good seal") {
			code = first["code"].(string)
		}
		if rec := out["recording"].(map[string]any); code != c.code || rec["ended"] != c.ended || rec["outcome"] != c.outcome {
			t.Errorf("%s: code %q, want %q; %v", c.outcome, code, c.code, rec)
		}
	}
}

// What is left on a screen of 24 lines is the answer.
func TestTextEndsWithTheAnswer(t *testing.T) {
	lines := strings.Split(strings.TrimRight(textOf(t, t1(t), t1Meta(), mill.US), "\n"), "\n")
	last := joined(strings.Join(lines[len(lines)-5:], " | "))
	if want := "IN SHORT | RISING 725 gauge psi, come up from below | FALLING 621 gauge psi, come down from above | NEVER ABOVE 950 gauge psi | GRADE service; 4 warnings above"; last != want {
		t.Errorf("ends with\n%s\nwant\n%s", last, want)
	}
	m := t1Meta()
	m.CautionsShown = true
	out := joined(textOf(t, t1(t), m, mill.US))
	if !strings.Contains(out, "CAUTIONS - As shown at the start") || strings.Contains(out, Cautions()[1]) {
		t.Error("cautions that were shown are repeated, or not spoken of")
	}
	if out := strings.ReplaceAll(joined(htmlOf(t, t1(t), m, mill.US)), "&#39;", "'"); !strings.Contains(out, Cautions()[1]) {
		t.Error("the page has no cautions of its own")
	}
}

// toTarget is T-1 with another stress wanted.
func toTarget(t testing.TB, stressPsi float64) *analyze.Result {
	t.Helper()
	q, err := mill.ParseQuantity(fmt.Sprintf("%g psi", stressPsi), mill.DimPressure)
	if err != nil {
		t.Fatal(err)
	}
	target := mill.Pressure{Quantity: q}
	r, err := analyze.Analyze(analyze.Input{Profile: exampleProfile(t), Tensioner: "T-1", Band: "QW-6", Target: target, Set: t1Set(20)})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestTargetOutOfRangeIsSaidOnceInTheReadersUnits(t *testing.T) {
	r := toTarget(t, 13000)
	for name, out := range map[string]string{"text": textOf(t, r, t1Meta(), mill.US), "html": htmlOf(t, r, t1Meta(), mill.US)} {
		out = strings.ReplaceAll(joined(out), "&#39;", "'")
		for _, want := range []string{"13,000 band psi lies outside", "band psi, the range captured rising", "950 gauge psi"} {
			if !strings.Contains(out, want) {
				t.Errorf("%s lacks %q", name, want)
			}
		}
		if n := strings.Count(out, "captured rising"); n > 2 {
			t.Errorf("%s says it %d times", name, n)
		}
		if n := strings.Count(out, "the target lies outside the captured range"); n > 0 {
			t.Errorf("%s says it again without figures, %d times", name, n)
		}
	}
	// Falling alone lacks it: the card says so once, and has no empty table.
	one := htmlOf(t, toTarget(t, 11500), t1Meta(), mill.US)
	_, falling, _ := strings.Cut(one, `<article class="aim falling">`)
	falling, _, _ = strings.Cut(falling, "</article>")
	if strings.Count(falling, "not known") != 1 || strings.Contains(falling, "<table>") || !strings.Contains(falling, "say without") {
		t.Errorf("falling card: %s", falling)
	}
}

func TestExplainSpeaksTheReadersUnits(t *testing.T) {
	r := t1(t)
	_, stress := r.SettingAt(analyze.Rising, 13000*psi)
	_, setting := r.StressAt(analyze.Falling, 2000*psi)
	for _, c := range []struct {
		err  error
		s    mill.System
		want string
	}{
		{stress, mill.US, "13,000 band psi lies outside "}, {stress, mill.SI, "89.63 band MPa lies outside "},
		{setting, mill.US, "2,000 gauge psi lies outside "}, {setting, mill.SI, "137.9 gauge bar lies outside "},
		{errors.New("no port"), mill.US, "no port"},
		{&analyze.OutOfRangeError{What: "band stress"}, mill.US, "band stress"},
	} {
		if got := Explain(c.err, c.s); !strings.HasPrefix(got, c.want) {
			t.Errorf("%q, want %q ...", got, c.want)
		}
	}
}

func TestZeroMarksAreAccountedFor(t *testing.T) {
	set := t1Set(20)
	set.Marks = []pairing.Mark{{T: 5, Kind: pairing.Zero}}
	r := analysed(t, set)
	if out := joined(textOf(t, r, t1Meta(), mill.US)); !strings.Contains(out, "operator's zero marks that agree: 1") {
		t.Error("the text has no word about the mark")
	}
	marks := decoded(t, r, t1Meta())["zero_marks"].(map[string]any)
	if marks["given"] != 1.0 || marks["agree"] != 1.0 {
		t.Errorf("%v", marks)
	}
}

// JCGM 100 7.2.6: at most two digits of the uncertainty. None that the
// instrument does not show, but one always.
func TestDigitsFollowTheInstrument(t *testing.T) {
	for _, c := range []struct {
		half, count float64
		want        string
	}{
		{0.26, 0.1, "724.5 +/- 0.3 psi"}, {0.26, 0.01, "724.54 +/- 0.26 psi"}, {0.26, 0, "724.54 +/- 0.26 psi"},
		{0.026, 0.1, "724.54 +/- 0.03 psi"}, {18, 0.1, "725 +/- 18 psi"}, {18, 20, "720 +/- 20 psi"},
	} {
		e := estimate.Estimate{Value: 724.54, System: c.half / estimate.Student95(1e9), DoF: 1e9, Method: "test"}
		if got := figureRead(e, unit{"psi", 1}, c.count).String(); got != c.want {
			t.Errorf("half-width %v, count %v: %q, want %q", c.half, c.count, got, c.want)
		}
	}
}
