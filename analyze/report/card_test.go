package report

import (
	"bytes"
	"errors"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

func cardOfT1(t *testing.T, r *analyze.Result, o CardOrder, s mill.System) (string, error) {
	t.Helper()
	var b bytes.Buffer
	err := Card(&b, r, t1Meta(), o, s)
	return b.String(), err
}

func TestCardSaysDirectionNumberAndWhatToDoAfterwards(t *testing.T) {
	text, err := cardOfT1(t, t1(t), CardOrder{Direction: analyze.Rising}, mill.US)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Come up to it from below and stop on it", "72", "gauge psi", "gauge bar", "Went past it? Drop to 5", "to this side only", "Never above <b>950 gauge psi",
		"one face only", "Not checked by a fresh approach", "Void after", "manual"} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
	for _, no := range []string{"safe", "NaN", "tension<"} {
		if strings.Contains(text, no) {
			t.Errorf("the card says %q", no)
		}
	}
	sameBytes(t, "t1-card.html", []byte(text))
}

func TestCardFromAboveAsksToLoadFirst(t *testing.T) {
	text, err := cardOfT1(t, t1(t), CardOrder{Direction: analyze.Falling, Hold: mill.HoldLocked}, mill.SI)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Come down to it from above", "First load up to", "gauge bar", "a valve that locks the oil in"} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
}

func TestLockedOilIsToldInsteadOfTheDrift(t *testing.T) {
	text, err := cardOfT1(t, t1(t), CardOrder{Direction: analyze.Rising, Hold: mill.HoldLocked}, mill.US)
	if err != nil || !strings.Contains(text, "vibration adds up to") || strings.Contains(text, "to this side only") {
		t.Errorf("locked oil: %v\n%s", err, text)
	}
}

func TestCardIsRefused(t *testing.T) {
	rising := CardOrder{Direction: analyze.Rising}
	for _, c := range []struct {
		name   string
		order  CardOrder
		change func(r *analyze.Result)
		reason string
	}{
		{"without a direction", CardOrder{}, nil, "no direction"},
		{"without a setting", rising, func(r *analyze.Result) { r.AtRising.SettingSI = estimate.Unknown("nobody ramped") }, "nobody ramped"},
		{"above the limit", rising, func(r *analyze.Result) { r.Setup.LimitSI = 700 * psi }, "above the tensioner's limit"},
		{"scatter", rising, func(r *analyze.Result) { r.Setup.TargetPa /= 1e4 }, "stray"},
		{"a falling card that needs more than the limit", CardOrder{Direction: analyze.Falling}, func(r *analyze.Result) { r.Setup.LimitSI = 725 * psi }, "past the tensioner's limit"},
		{"a fresh approach that differs", CardOrder{Direction: analyze.Rising, Proof: &analyze.Approach{Agreement: analyze.Differs}}, nil, "outside the interval"},
		{"nothing said of the hold", rising, func(r *analyze.Result) { r.Setup.Tensioner.Hold = "" }, "what holds the pressure"},
	} {
		r := t1(t)
		if c.change != nil {
			c.change(r)
		}
		_, err := cardOfT1(t, r, c.order, mill.US)
		refused, ok := errors.AsType[*CardError](err)
		if !ok || !strings.Contains(refused.Reason, c.reason) || refused.Next == "" {
			t.Errorf("%s: %v", c.name, err)
		}
	}
}

func TestCardPrintsOnOnePage(t *testing.T) {
	browser := chromium(t)
	m := t1Meta()
	m.ClockFactor = 60
	for _, o := range []CardOrder{{Direction: analyze.Rising}, {Direction: analyze.Falling}} {
		var b bytes.Buffer
		if err := Card(&b, t1(t), m, o, mill.US); err != nil {
			t.Fatal(err)
		}
		if n := printedPages(t, browser, b.String()); n != 1 {
			t.Errorf("%s: %d pages", o.Direction, n)
		}
	}
}

func bandOnFile(t *testing.T, r *analyze.Result, name string) *analyze.Result {
	t.Helper()
	for _, b := range r.Setup.Bands {
		if b.Name == name {
			p, err := r.ForBand(b, mill.Pressure{})
			if err != nil {
				t.Fatal(err)
			}
			return p
		}
	}
	t.Fatalf("no band %s on file", name)
	return nil
}

func TestCardOfSeveralBandsAsksWhetherTheWheelIsTheSame(t *testing.T) {
	r := t1(t)
	o := CardOrder{Direction: analyze.Rising, Others: []*analyze.Result{bandOnFile(t, r, "QM-2")}}
	_, err := cardOfT1(t, r, o, mill.US)
	if refused, ok := errors.AsType[*CardError](err); !ok || !strings.Contains(refused.Next, "same weight") {
		t.Errorf("another band on trust: %v", err)
	}
	o.SameWheel = true
	text, err := cardOfT1(t, r, o, mill.US)
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"QM-2", "worked out from the wheel pull measured with QW-6", "Other bands on file", "QN-17: ", "confirmed, not checked", "ground narrower by 10 % of its net width carries 11 % more"} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
	if strings.Contains(text, "<li>QM-2: ") {
		t.Error("a band on the card stands among the others on file too")
	}
}

func TestFileSaysWhichBandsLiePastTheLimit(t *testing.T) {
	r := t1(t)
	for i := range r.Setup.Bands {
		if r.Setup.Bands[i].Name == "QN-17" {
			r.Setup.Bands[i].Target.SI *= 6
		}
	}
	text := strings.Join(onFile(r, CardOrder{}, unitsFor(r.Setup.Tensioner, mill.US)), "\n")
	if !strings.Contains(text, "QN-17: its target lies past the limit") || !strings.Contains(text, "QM-2: can be brought") {
		t.Error(text)
	}
}

// comparedDial is a dial of the mill that shows 2 % too much, one mark every
// 20 psi.
func comparedDial() analyze.Dial {
	line := estimate.Line{A: 0, B: 1.02 / psi, ResidualSD: 2, DoF: 4, N: 6, VarA: 1, VarB: 1e-12 / psi / psi}
	way := analyze.DialLine{Line: line, SpreadDoF: 4, LowSI: 300 * psi, HighSI: 850 * psi}
	return analyze.Dial{Name: "panel dial", Unit: "psi", Graduation: 20, Rising: way, Falling: way}
}

func TestCardIsReadOnTheMillsOwnDial(t *testing.T) {
	r := t1(t)
	r.Dial = comparedDial()
	r.Dial.AtRising = r.Dial.Read(analyze.Rising, r.AtRising.TrueSI)
	text, err := cardOfT1(t, r, CardOrder{Direction: analyze.Rising}, mill.US)
	if err != nil {
		t.Fatal(err)
	}
	// 1.02 x 724.5 = 739, to the nearest 20; 1.02 x 570 = 581.
	for _, want := range []string{"740 <span class=\"unit\">psi on panel dial", "Drop to 580 psi on panel dial", "on the transducer", "to its graduation"} {
		if !strings.Contains(text, want) {
			t.Errorf("the card lacks %q", want)
		}
	}
	r.Dial = analyze.Dial{}
	if text, err = cardOfT1(t, r, CardOrder{Direction: analyze.Rising}, mill.US); err != nil || !strings.Contains(text, "the transducer only") {
		t.Errorf("without a dial: %v", err)
	}
}
