package findings

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// engine evaluates rows against features.
type engine struct {
	features map[FeatureKey]Feature
	limit    func(mill.ThresholdKey) float64
	data     *data
}

// holds is the probability that a test's feature truly lies beyond its limit;
// NaN where it is not known.
func (e engine) holds(t test) float64 {
	if t.is == Missing {
		if e.features[t.feature].Is.Known() {
			return 0
		}
		return 1
	}
	p := e.features[t.feature].Is.Above(e.limit(t.limit))
	if t.is == Below {
		return 1 - p
	}
	return p
}

// verdict is one row evaluated.
type verdict struct {
	row
	evidence  float64 // probability that all tests hold and no rival does; NaN where a test cannot be made
	seen      float64 // of the tests that can be made
	unknown   []Feature
	ruledOut  []string
	notRuled  []string
	certainty float64
}

func (e engine) judge(r row) verdict {
	v := verdict{row: r, evidence: 1, seen: 1}
	for i, t := range r.tests {
		p := e.holds(t)
		switch {
		case !math.IsNaN(p):
			v.seen *= p
		case i == 0: // nothing was seen of what it is told by
			v.seen = math.NaN()
			fallthrough
		default:
			v.unknown = append(v.unknown, e.features[t.feature])
		}
		v.evidence *= p
	}
	v.evidence = posterior(v.evidence)
	for _, rv := range r.rivals {
		p := 1.0
		for _, t := range rv.tests {
			p *= e.holds(t)
		}
		p = posterior(p)
		switch {
		case math.IsNaN(p):
			v.notRuled = append(v.notRuled, rv.says)
			continue
		case p < 0.1:
			v.ruledOut = append(v.ruledOut, rv.says)
		default:
			v.notRuled = append(v.notRuled, rv.says)
		}
		v.evidence *= 1 - p
	}
	if !math.IsNaN(v.evidence) {
		v.certainty = calibrated(v.evidence)
	}
	return v
}

// run fills a report. Rows that others say more exactly give way to them.
func (e engine) run(rows []row, rep *Report) {
	var all []verdict
	for _, r := range rows {
		all = append(all, e.judge(r))
	}
	for _, v := range all {
		if v.certainty >= leastCertain && !silenced(v, all) {
			rep.Findings = append(rep.Findings, e.finding(v))
		}
	}
	slices.SortStableFunc(rep.Findings, func(a, b Finding) int {
		if c := compare(b.Certainty, a.Certainty); c != 0 {
			return c
		}
		return compare(orNought(b.Times), orNought(a.Times))
	})
	rep.account(all)
}

// account says of each cause that is in no finding whether it was looked for.
func (rep *Report) account(all []verdict) {
	named := map[Key]bool{}
	for _, f := range rep.Findings {
		for _, c := range f.Causes {
			named[c.Key] = true
		}
	}
	for _, v := range all {
		for _, c := range v.causes {
			if named[c.Key] {
				continue
			}
			named[c.Key] = true
			if why := openWhy(c.Key, all); why != "" {
				rep.open(c, why)
			} else {
				rep.Clear = append(rep.Clear, c)
			}
		}
	}
}

func (rep *Report) open(c Cause, why string) {
	for i := range rep.Open {
		if rep.Open[i].Why == why {
			rep.Open[i].Causes = append(rep.Open[i].Causes, c)
			return
		}
	}
	rep.Open = append(rep.Open, Open{why, []Cause{c}})
}

// openWhy is why a cause could not be seen: a row of it lacks a figure, and
// nothing that was seen speaks against it. Empty where it was looked for.
func openWhy(k Key, all []verdict) string {
	for _, v := range all {
		if len(v.causes) == 1 && v.causes[0].Key == k && len(v.unknown) > 0 && !(v.seen < leastCertain) {
			return whyOpen(v.unknown)
		}
	}
	return ""
}

// silenced is whether a row that says the same more exactly is found too, and
// nearly as certain.
func silenced(v verdict, all []verdict) bool {
	for _, o := range all {
		if slices.Contains(v.yields, o.key) && o.certainty >= leastCertain && o.evidence >= 0.5*v.evidence {
			return true
		}
	}
	return false
}

func whyOpen(unknown []Feature) string {
	var whys []string
	for _, f := range unknown {
		if !slices.Contains(whys, f.Is.Why) {
			whys = append(whys, f.Is.Why)
		}
	}
	return strings.Join(whys, "; ")
}

func (e engine) finding(v verdict) Finding {
	f := Finding{
		Key: v.key, Name: v.name, Causes: v.causes, Certainty: v.certainty, Word: wordOf(v.certainty), Level: v.level,
		RuledOut: v.ruledOut, NotRuled: v.notRuled, Next: v.next,
		Advice: append([]string{lockOut}, v.advice...), Region: e.data.region(v.region),
	}
	if f.Word != High {
		f.Level = Watch
	}
	for _, t := range v.tests {
		if t.is != Missing {
			f.Evidence = append(f.Evidence, e.evidence(t))
		}
	}
	for _, k := range v.shows {
		if g := e.features[k]; g.Is.Known() && !slices.ContainsFunc(f.Evidence, func(x Evidence) bool { return x.Key == k }) {
			f.Evidence = append(f.Evidence, Evidence{Feature: g, Beyond: math.NaN()})
		}
	}
	f.Times, f.Share = severity(f.Evidence[0])
	return f
}

func (e engine) evidence(t test) Evidence {
	return Evidence{Feature: e.features[t.feature], Relation: t.is, Limit: e.limit(t.limit), Threshold: t.limit, Beyond: e.holds(t)}
}

// severity is the leading figure over its limit, and the figure itself where it
// is a share of the working setting or of the stretch there.
func severity(lead Evidence) (times float64, share estimate.Estimate) {
	times = lead.Is.Value / lead.Limit
	if lead.Relation == Below {
		times = math.NaN() // how far short says nothing of how bad
	}
	if lead.In == OfSetting || lead.In == OfStretch {
		return times, lead.Is
	}
	return times, estimate.Unknown(fmt.Sprintf("%q is no share of the working setting", lead.Name))
}

func orNought(x float64) float64 {
	if math.IsNaN(x) {
		return 0
	}
	return x
}
