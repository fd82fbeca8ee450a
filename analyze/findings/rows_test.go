package findings

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

func kinds() []mill.SetBy {
	return []mill.SetBy{mill.SetByPressure, mill.SetByTorque, mill.SetByTurns, mill.SetBySpring}
}

func table(k mill.ThresholdKey) float64 {
	v, _ := (*mill.Profile)(nil).Threshold(k)
	return v
}

// figure is well beyond a limit, or well short of it, for a test to hold.
func figure(t test, holds bool) estimate.Estimate {
	if t.is == Missing {
		if holds {
			return estimate.Unknown("left out")
		}
		return estimate.Exact(0, "made up")
	}
	limit := table(t.limit)
	value := limit * 1.5
	if (t.is == Below) == holds {
		value = limit * 0.5
	}
	return estimate.Estimate{Value: value, System: math.Abs(limit) * 0.05, DoF: math.Inf(1), Method: "made up"}
}

// evidenceFor is the features under which a row is found and nothing else is
// said of any feature: its tests hold, its rivals do not.
func evidenceFor(r row) map[FeatureKey]Feature {
	m := map[FeatureKey]Feature{}
	for _, f := range features() {
		m[f.key] = Feature{Key: f.key, Name: f.name, In: f.in, Is: estimate.Unknown("not made up")}
	}
	set := func(t test, holds bool) {
		f := m[t.feature]
		f.Is = figure(t, holds)
		m[t.feature] = f
	}
	for _, rv := range r.rivals {
		for _, t := range rv.tests {
			set(t, false)
		}
	}
	for _, t := range r.tests {
		set(t, true)
	}
	return m
}

func found(by mill.SetBy, m map[FeatureKey]Feature, key Key) bool {
	var rep Report
	e := engine{features: m, limit: table, data: emptyData()}
	e.run(rowsFor(by), &rep)
	return slices.ContainsFunc(rep.Findings, func(f Finding) bool { return f.Key == key })
}

func emptyData() *data { return &data{r: emptyResult()} }

func TestEachRuleRestsOnEachPieceOfItsEvidence(t *testing.T) {
	for _, by := range kinds() {
		for _, r := range rowsFor(by) {
			t.Run(fmt.Sprintf("%s/%s", by, r.key), func(t *testing.T) {
				if !found(by, evidenceFor(r), r.key) {
					t.Fatal("not found with all its evidence")
				}
				for _, out := range r.tests {
					m := evidenceFor(r)
					f := m[out.feature]
					f.Is = figure(out, false)
					m[out.feature] = f
					if found(by, m, r.key) {
						t.Errorf("still found without %s %s", out.feature, out.is)
					}
				}
				for _, rv := range r.rivals {
					m := evidenceFor(r)
					for _, held := range rv.tests {
						if slices.ContainsFunc(r.tests, func(x test) bool { return x.feature == held.feature }) {
							continue
						}
						f := m[held.feature]
						f.Is = figure(held, true)
						m[held.feature] = f
					}
					if !sharesFeature(r, rv) && found(by, m, r.key) {
						t.Errorf("found although %s explains it", rv.says)
					}
				}
			})
		}
	}
}

// sharesFeature is whether a rival is told by a feature of the row itself.
func sharesFeature(r row, rv rival) bool {
	for _, t := range rv.tests {
		if slices.ContainsFunc(r.tests, func(x test) bool { return x.feature == t.feature }) {
			return true
		}
	}
	return false
}

func TestEachThresholdDecides(t *testing.T) {
	for _, by := range kinds() {
		for _, r := range rowsFor(by) {
			for _, on := range r.tests {
				if on.is == Missing {
					continue
				}
				var rep Report
				e := engine{features: evidenceFor(r), data: emptyData(), limit: func(k mill.ThresholdKey) float64 {
					if k != on.limit {
						return table(k)
					}
					if on.is == Above {
						return table(k) * 3
					}
					return table(k) / 3
				}}
				e.run(rowsFor(by), &rep)
				if slices.ContainsFunc(rep.Findings, func(f Finding) bool { return f.Key == r.key }) {
					t.Errorf("%s: %s is found whatever %s is", by, r.key, on.limit)
				}
			}
		}
	}
}

func TestRowsAreWhole(t *testing.T) {
	limits := map[mill.ThresholdKey]bool{}
	for _, l := range mill.Thresholds() {
		limits[l.Key] = true
	}
	known := map[FeatureKey]bool{}
	for _, f := range features() {
		known[f.key] = true
	}
	for _, by := range kinds() {
		keys := map[Key]bool{}
		for _, r := range rowsFor(by) {
			if keys[r.key] {
				t.Errorf("%s: %s stands twice", by, r.key)
			}
			keys[r.key] = true
			if n := len(r.causes); n < 1 || n > 3 {
				t.Errorf("%s: a group of %d", r.key, n)
			}
			if r.name == "" || r.next == "" || len(r.advice) == 0 || r.level == "" || len(r.tests) == 0 || r.tests[0].is == Missing {
				t.Errorf("%s lacks its name, next measurement, advice, level or tests", r.key)
			}
			for _, c := range r.causes {
				if c.Name == "" {
					t.Errorf("%s has no name", c.Key)
				}
			}
			for _, on := range r.tests {
				if !known[on.feature] || on.is != Missing && !limits[on.limit] {
					t.Errorf("%s: test of %q against %q", r.key, on.feature, on.limit)
				}
			}
			for _, text := range append(append([]string{r.name, r.next}, r.advice...), lockOut) {
				for _, word := range []string{" safe", "Safe", "strain", "tension "} {
					if strings.Contains(text, word) {
						t.Errorf("%s: %q in %q", r.key, word, text)
					}
				}
			}
		}
	}
}
