package report

import (
	"tautramp/analyze/findings"
)

// foundJSON is the findings with their evidence. Nobody looked: looked is
// false, and the lists are empty.
func foundJSON(rep *findings.Report, by setBy) object {
	if rep == nil {
		rep = &findings.Report{}
		return findingsObject(rep, by, false)
	}
	return findingsObject(rep, by, true)
}

func findingsObject(rep *findings.Report, by setBy, looked bool) object {
	return object{
		{"looked", looked},
		{"found", each(rep.Findings, func(f findings.Finding) object { return findingJSON(f, by) })},
		{"not_measured", each(rep.Open, func(o findings.Open) object {
			return object{{"why", clean(o.Why, textLength)}, {"causes", each(o.Causes, causeJSON)}}
		})},
		{"not_found", each(rep.Clear, causeJSON)},
		{"own_thresholds", each(rep.Own, func(o findings.OwnLimit) object {
			return object{{"key", string(o.Key)}, {"value", number(o.Value)}, {"table", number(o.Table)}}
		})},
		{"features", each(rep.Features, featureJSON)},
	}
}

func findingJSON(f findings.Finding, by setBy) object {
	return object{
		{"key", string(f.Key)}, {"name", clean(f.Name, nameLength)},
		{"causes", each(f.Causes, causeJSON)},
		{"certainty", number(f.Certainty)}, {"certainty_word", string(f.Word)}, {"level", string(f.Level)},
		{"times_limit", number(f.Times)}, {"share", estimateJSON(f.Share)},
		{"evidence", each(f.Evidence, func(e findings.Evidence) object {
			return append(featureJSON(e.Feature), object{
				{"relation", string(e.Relation)}, {"limit", number(e.Limit)}, {"threshold", string(e.Threshold)}, {"beyond", number(e.Beyond)},
			}...)
		})},
		{"ruled_out", texts(f.RuledOut)}, {"not_ruled_out", texts(f.NotRuled)},
		{"next", clean(f.Next, textLength)}, {"advice", texts(f.Advice)},
		{"region", object{
			{"says", clean(f.Region.Words, nameLength)},
			{"low", by.inSetting(number(f.Region.LowSI))}, {"high", by.inSetting(number(f.Region.HighSI))},
			{"low_stress_pa", number(f.Region.LowPa)}, {"high_stress_pa", number(f.Region.HighPa)},
			{"low_stretch_m", number(f.Region.LowM)}, {"high_stretch_m", number(f.Region.HighM)},
			{"from_s", number(f.Region.FromS)}, {"until_s", number(f.Region.UntilS)},
		}},
	}
}

func featureJSON(f findings.Feature) object {
	return object{
		{"feature", string(f.Key)}, {"says", clean(f.Name, nameLength)}, {"measure", string(f.In)},
		{"is", estimateJSON(f.Is)}, {"of", given(f.OfSI)},
	}
}

func causeJSON(c findings.Cause) object {
	return object{{"key", string(c.Key)}, {"name", clean(c.Name, nameLength)}}
}

func texts(list []string) []string {
	out := make([]string, 0, len(list))
	for _, t := range list {
		out = append(out, clean(t, textLength))
	}
	return out
}
