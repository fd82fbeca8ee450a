package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
	"tautramp/analyze/findings"
)

// foundMeta is a report with a finding of one cause group, one thing not
// measured and a limit of the mill's own.
func foundMeta() Meta {
	share := estimate.Estimate{Value: 0.072, Random: 0.001, System: 0.002, DoF: 4, Method: "made up"}
	m := t1Meta()
	m.Found = &findings.Report{
		Findings: []findings.Finding{{
			Key: "wide-loop", Name: "Wide loop", Causes: []findings.Cause{{Key: "slide-drag", Name: "rusted slide"}, {Key: "seal-drag", Name: "dragging seal"}},
			Certainty: 0.97, Word: findings.High, Level: findings.Service, Times: 1.2, Share: share,
			Evidence: []findings.Evidence{{
				Feature:  findings.Feature{Key: "half_width", Name: "half-width", In: findings.OfSetting, Is: share, OfSI: 724 * psi},
				Relation: findings.Above, Limit: 0.06, Threshold: mill.FrictionWide, Beyond: 0.99,
			}},
			RuledOut: []string{"lag"}, NotRuled: []string{"a bent gauge"}, Next: "Clean and ramp again.", Advice: []string{"Lock out first.", "Clean."},
			Region: findings.Region{Words: "the gap", LowSI: 600 * psi, HighSI: 730 * psi, LowPa: 9000 * psi, HighPa: 9800 * psi, LowM: 1e-4, HighM: 2e-4, FromS: math.NaN(), UntilS: math.NaN()},
		}},
		Open:  []findings.Open{{Why: "one span was measured", Causes: []findings.Cause{{Key: "wheel-drag", Name: "wheel drag"}}}},
		Clear: []findings.Cause{{Key: "lag", Name: "lag"}},
		Own:   []findings.OwnLimit{{Threshold: mill.Threshold{Key: mill.FrictionWide, Value: 0.06}, Table: 0.05}},
	}
	return m
}

func TestFindingIsToldWithItsFigures(t *testing.T) {
	out := string(written(t, func(b *bytes.Buffer) error { return Text(b, t1(t), foundMeta(), mill.US) }))
	for _, want := range []string{
		"1. WIDE LOOP: high certainty, service", "rusted slide or dragging seal: this recording cannot tell which",
		"half-width: 52.1 gauge psi = 7.20", "of 724 gauge psi", "(limit: above 6 %)", "1.2 times the limit",
		"box 1 on the loop", "not ruled out: a bent gauge", "Lock out first.", "Wheel drag: one span was measured", "friction_wide",
	} {
		if !strings.Contains(strings.Join(strings.Fields(out), " "), want) {
			t.Errorf("%q is not in\n%s", want, out)
		}
	}
	if strings.Contains(out, "0.97") || strings.Contains(out, "97 %") {
		t.Error("the certainty is printed as a number")
	}
}

func TestFindingIsMarkedOnTheLoop(t *testing.T) {
	plain := string(written(t, func(b *bytes.Buffer) error { return SVG(b, t1(t), Meta{}, PlotLoop, mill.US) }))
	marked := string(written(t, func(b *bytes.Buffer) error { return SVG(b, t1(t), foundMeta(), PlotLoop, mill.US) }))
	if strings.Contains(plain, "where a finding is seen") || !strings.Contains(marked, "where a finding is seen") {
		t.Error("the box is drawn without a finding, or not with one")
	}
}

func TestFindingsFollowTheSchema(t *testing.T) {
	m := foundMeta()
	m.Before = &findings.Comparison{Same: true, Changes: []findings.Change{{Name: "half-width", Role: findings.ASetting,
		Before: estimate.Exact(1, "made up"), After: estimate.Exact(2, "made up"), By: estimate.Exact(1, "made up"), Chance: 0, Word: findings.ClearChange}}}
	var v any
	if err := json.Unmarshal(written(t, func(b *bytes.Buffer) error { return JSON(b, t1(t), m) }), &v); err != nil {
		t.Fatal(err)
	}
	c, root := newChecker(t)
	if err := c.check("result", root, v); err != nil {
		t.Error(err)
	}
}

func TestDialFollowsTheSchema(t *testing.T) {
	r := t1(t)
	r.Dial = comparedDial()
	r.Dial.AtRising = r.Dial.Read(analyze.Rising, r.AtRising.TrueSI)
	r.Dial.Falling.Line.N = 0
	v := decoded(t, r, t1Meta())
	c, root := newChecker(t)
	if err := c.check("result", root, v); err != nil {
		t.Error(err)
	}
	dial := v["dial"].(map[string]any)
	if dial["name"] != "panel dial" || dial["rising"] == nil || dial["falling"] != nil {
		t.Errorf("%v", dial)
	}
}
