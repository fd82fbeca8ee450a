package report

import (
	"bytes"
	"errors"
	"regexp"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

func written(t testing.TB, write func(*bytes.Buffer) error) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// systemsTested is one in a short run: words and layout hardly differ.
func systemsTested() int {
	if testing.Short() {
		return 1
	}
	return 2
}

// writers are all ways out but PNG, by name.
func writers(s mill.System, m Meta) map[string]func(*bytes.Buffer, *analyze.Result) error {
	all := map[string]func(*bytes.Buffer, *analyze.Result) error{
		"text":  func(b *bytes.Buffer, r *analyze.Result) error { return Text(b, r, m, s) },
		"html":  func(b *bytes.Buffer, r *analyze.Result) error { return HTML(b, r, m, s) },
		"csv":   func(b *bytes.Buffer, r *analyze.Result) error { return CSV(b, r, m, s) },
		"pairs": func(b *bytes.Buffer, r *analyze.Result) error { return PairsCSV(b, r, s) },
		"json":  func(b *bytes.Buffer, r *analyze.Result) error { return JSON(b, r, m) },
	}
	for _, p := range Plots() {
		all[string(p)] = func(b *bytes.Buffer, r *analyze.Result) error { return SVG(b, r, Meta{}, p, s) }
	}
	return all
}

// blank is a result of which nothing is known.
func blank(by mill.SetBy) *analyze.Result {
	r := &analyze.Result{}
	r.Setup.Tensioner.SetBy = by
	r.Friction.F0N = estimate.Unknown("no falling branch was captured")
	r.AtRising.TrueSI = estimate.Unknown("the zero is not known")
	return r
}

func kinds() []mill.SetBy {
	return []mill.SetBy{mill.SetByPressure, mill.SetByTorque, mill.SetByTurns, mill.SetBySpring, "", "steam"}
}

func TestNothingKnownIsSaidAndNeverANumber(t *testing.T) {
	for _, by := range kinds() {
		for _, s := range []mill.System{mill.US, mill.SI, ""} {
			for name, write := range writers(s, Meta{}) {
				out := string(written(t, func(b *bytes.Buffer) error { return write(b, blank(by)) }))
				for _, bad := range []string{"NaN", "Inf", "+/- 0", "±&nbsp;0", "<nil>", "%!"} {
					if strings.Contains(out, bad) {
						t.Errorf("%s of %q in %q: has %q", name, by, s, bad)
					}
				}
			}
		}
	}
	for _, name := range []string{"text", "html"} {
		out := string(written(t, func(b *bytes.Buffer) error { return writers(mill.US, Meta{})[name](b, blank(mill.SetByPressure)) }))
		for _, want := range []string{
			"not known: the zero is not known", "not known: no falling branch was captured", "no verdict",
			"not known: the recording states no time",
		} {
			if !strings.Contains(joined(out), want) {
				t.Errorf("%s lacks %q", name, want)
			}
		}
	}
}

func TestWithoutZeroEveryStressSaysWhy(t *testing.T) {
	r := withoutZero(t)
	for name, write := range writers(mill.US, t1Meta()) {
		out := string(written(t, func(b *bytes.Buffer) error { return write(b, r) }))
		for _, bad := range []string{"NaN", "Inf", "%!"} {
			if strings.Contains(out, bad) {
				t.Errorf("%s has %q", name, bad)
			}
		}
	}
	out := joined(string(written(t, func(b *bytes.Buffer) error { return Text(b, r, t1Meta(), mill.US) })))
	for _, want := range []string{"set to not known:", "Zero not known", "W, lifted weight not known:", "mu, friction in proportion 0.04"} {
		if !strings.Contains(out, want) {
			t.Errorf("lacks %q", want)
		}
	}
}

// joined undoes the wrapping of lines within a column, well enough to search.
func joined(text string) string { return strings.Join(strings.Fields(text), " ") }

func TestNoVerdictGivesItsReason(t *testing.T) {
	r := t1(t)
	r.Grade = analyze.Inconclusive
	r.Warnings = []analyze.Warning{{Code: "no-grade", Text: "The half-width may be anything."}}
	out := string(written(t, func(b *bytes.Buffer) error { return Text(b, r, t1Meta(), mill.US) }))
	if !strings.Contains(joined(out), "no verdict: The half-width may be anything.") {
		t.Error("no reason beside no verdict")
	}
	r.WidthRatio = estimate.Unknown("no falling branch was captured")
	out = string(written(t, func(b *bytes.Buffer) error { return Text(b, r, t1Meta(), mill.US) }))
	if !strings.Contains(joined(out), "no verdict: no falling branch was captured") {
		t.Error("no reason beside no verdict where the half-width is not known")
	}
}

// The words that no output may use bare: in the trade one is the wheel pull and
// the other the rolled-in plate stress; the third promises what no report can.
func misleading() *regexp.Regexp {
	return regexp.MustCompile(`(?i)\b(un)?safe\w*|\b(strain|tension)(s|ed|ing)?\b`)
}

func TestWordsThatMislead(t *testing.T) {
	r, bad := t1(t), misleading()
	for _, text := range []string{"is safe", "band strain", "tensioned"} {
		if !bad.MatchString(text) {
			t.Errorf("the check would miss %q", text)
		}
	}
	check := func(name, out string) {
		for _, at := range bad.FindAllStringIndex(out, -1) {
			t.Errorf("%s: ...%s...", name, out[max(0, at[0]-40):min(len(out), at[1]+40)])
		}
	}
	for _, s := range []mill.System{mill.US, mill.SI}[:systemsTested()] {
		for name, write := range writers(s, t1Meta()) {
			if name == "pairs" {
				continue // readings and the analysis' own words, which the other outputs hold too
			}
			check(name, string(written(t, func(b *bytes.Buffer) error { return write(b, r) })))
			check(name, string(written(t, func(b *bytes.Buffer) error { return write(b, blank(mill.SetByTorque)) })))
		}
	}
	check("cautions", strings.Join(Cautions(), " "))
	check("schema", string(Schema()))
}

func TestCautionsNameEveryDanger(t *testing.T) {
	all := strings.ToLower(strings.Join(Cautions(), " "))
	for _, want := range []string{
		"lock out", "store energy", "band's plane", "maker's limit", "injection", "cracked", "rig off before any run",
		"manual", "local codes", "qualified persons", "never with a hand",
	} {
		if !strings.Contains(all, want) {
			t.Errorf("no caution says %q", want)
		}
	}
	for name, write := range writers(mill.US, t1Meta()) {
		if name != "text" && name != "html" && name != "json" {
			continue
		}
		out := strings.ReplaceAll(joined(string(written(t, func(b *bytes.Buffer) error { return write(b, t1(t)) }))), "&#39;", "'")
		for _, c := range Cautions() {
			if !strings.Contains(out, c) {
				t.Errorf("%s lacks the caution %q", name, c)
			}
		}
	}
}

func TestWriteErrorsComeBack(t *testing.T) {
	r, m := t1(t), t1Meta()
	for name, err := range map[string]error{
		"text": Text(failing{}, r, m, mill.US), "html": HTML(failing{}, r, m, mill.US), "csv": CSV(failing{}, r, m, mill.US),
		"pairs": PairsCSV(failing{}, r, mill.US), "json": JSON(failing{}, r, m),
		"svg": SVG(failing{}, r, Meta{}, PlotLoop, mill.US), "png": PNG(failing{}, r, Meta{}, PlotLoop, mill.US),
	} {
		if !errors.Is(err, errFull) {
			t.Errorf("%s: %v, want the writer's error", name, err)
		}
	}
}

var errFull = errors.New("disk full")

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, errFull }
