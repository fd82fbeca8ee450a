package report

import (
	"bytes"
	"encoding/json"
	"io"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// schemaVersion is the version of the JSON; result.schema.json has the same.
const schemaVersion = 1

// JSON writes every figure of the result, SI, after the schema that Schema
// returns. The same result gives the same bytes: no time of writing, no order
// of maps, no NaN. Errors are the writer's.
func JSON(w io.Writer, r *analyze.Result, m Meta) error {
	var b bytes.Buffer
	out := json.NewEncoder(&b)
	out.SetEscapeHTML(false)
	out.SetIndent("", "  ")
	if err := out.Encode(resultJSON(r, m)); err != nil {
		return err
	}
	_, err := w.Write(b.Bytes())
	return err
}

func resultJSON(r *analyze.Result, m Meta) object {
	by := setByOf(r.Setup.Tensioner.SetBy)
	v := verdictOf(r)
	return object{
		{"schema_version", schemaVersion},
		{"program", clean(m.Program, nameLength)},
		{"recording", recordingJSON(r, m)},
		{"setup", setupJSON(r.Setup, by)},
		{"predicted", predictedJSON(r)},
		{"cycles", each(r.Cycles, func(c analyze.Cycle) object { return cycleJSON(c, by) })},
		{"steps", each(r.Steps, stepJSON)},
		{"lag", lagJSON(r.Lag, by)},
		{"zero_marks", object{
			{"given", r.Marks.Given}, {"used", r.Marks.Used}, {"agree", r.Marks.Agree},
			{"differ", r.Marks.Differ}, {"loaded", r.Marks.Loaded}, {"unread", r.Marks.Unread},
		}},
		{"zeros", each(r.Zeros, func(z analyze.ZeroBy) object {
			return object{
				{"name", clean(z.Name, nameLength)}, {"used", z.Used}, {"zero_m", estimateJSON(z.ZeroM)},
				{"rising", by.inSetting(estimateJSON(z.Rising))}, {"falling", by.inSetting(estimateJSON(z.Falling))},
			}
		})},
		{"trials", each(r.Tried, trialJSON)},
		{"branches", object{{"rising", branchJSON(r.Rising, by)}, {"falling", branchJSON(r.Falling, by)}}},
		{"target", object{
			{"stress_pa", given(r.Setup.TargetPa)},
			{"rising", targetJSON(r.AtRising, by)},
			{"falling", targetJSON(r.AtFalling, by)},
			{"reset_after_overshoot", by.inSetting(estimateJSON(r.ResetSI))},
		}},
		{"friction", frictionJSON(r)},
		{"drivetrain", drivetrainJSON(r)},
		{"half_widths", each(r.Widths, func(w analyze.WidthAt) object {
			return object{{"stress_pa", number(w.StressPa)}, {"rising", by.inSetting(number(w.RisingSI))}, {"half_width", by.inSetting(estimateJSON(w.HalfSI))}}
		})},
		{"half_width_ratio", estimateJSON(r.WidthRatio)},
		{"half_width_budget", budgetJSON(r.Working.Budget, func(std float64) any { return by.inSetting(number(std)) })},
		{"grade", gradeJSON(r.Grade)},
		{"grade_says", v.Says},
		{"findings", foundJSON(m.Found, by)},
		{"found_and_left", beforeJSON(m.Before, r, by)},
		{"running_band", runningJSON(r.Running)},
		{"table", tableJSON(r, by)},
		{"bands", reachJSON(r, by)},
		{"instruments", each(r.Setup.Used, usedJSON)},
		{"dial", dialJSON(r)},
		{"warnings", each(allWarnings(r, m), func(w analyze.Warning) object {
			return object{{"code", clean(w.Code, nameLength)}, {"text", clean(w.Text, textLength)}}
		})},
		{"cautions", Cautions()},
	}
}

// each maps a list; an empty one is [] and never null.
func each[T any](list []T, f func(T) object) []object {
	out := make([]object, 0, len(list))
	for _, v := range list {
		out = append(out, f(v))
	}
	return out
}

func recordingJSON(r *analyze.Result, m Meta) object {
	notes := make([]string, 0, len(m.Notes))
	for _, n := range m.Notes {
		notes = append(notes, clean(n, textLength))
	}
	var started any
	if !m.Started.IsZero() {
		started = m.Started.Format(time.RFC3339Nano)
	}
	factor := m.ClockFactor
	if factor == 0 {
		factor = 1
	}
	return object{
		{"file", m.base()}, {"seal", clean(m.Seal, sealLength)}, {"outcome", outcomeJSON(m.Outcome)},
		{"bytes_after_seal", m.TailBytes}, {"recorder", clean(m.Recorder, nameLength)}, {"started", started},
		{"clock_factor", number(factor)}, {"imported", m.Imported}, {"ended", clean(r.Ended, textLength)},
		{"rehearsal", rehearsed(r, m)}, {"simulated", r.Simulated},
		{"continues", clean(m.Continues, sealLength)}, {"notes", notes},
	}
}

func outcomeJSON(outcome string) string {
	switch outcome {
	case "complete", "torn", "corrupt":
		return outcome
	}
	return "unknown"
}

func gradeJSON(g analyze.Grade) string {
	switch g {
	case analyze.Indistinct:
		return "indistinct"
	case analyze.Good, analyze.Watch, analyze.Service:
		return string(g)
	}
	return "inconclusive"
}

func setupJSON(s analyze.Setup, by setBy) object {
	return object{
		{"mill", clean(s.Mill.Name, nameLength)}, {"serviced_by", clean(s.Mill.ServicedBy, nameLength)},
		{"tensioner", clean(s.Tensioner.Name, nameLength)}, {"band", clean(s.Band.Name, nameLength)},
		{"set_by", setByJSON(s.Tensioner.SetBy)}, {"setting_unit", by.siUnit}, {"hold", holdJSON(s.Tensioner.Hold)},
		{"thickness_m", given(s.Band.Thickness.SI)}, {"net_width_m", given(s.Band.NetWidth.SI)},
		{"net_area_m2", given(s.NetAreaM2)}, {"modulus_pa", estimateJSON(s.ModulusPa)},
		{"gauge_length_m", estimateJSON(s.GaugeM)}, {"faces", max(1, s.Rig.Faces)},
		{"limit", by.inSetting(given(s.LimitSI))}, {"geometry_area_m2", given(s.GeometryM2)},
		{"extension_count_m", given(s.CountM)}, {"setting_count", by.inSetting(given(s.CountSI))},
		{"extension_instrument_std_m", given(s.ExtensionSd)},
		{"setting_instrument_std", by.inSetting(given(s.SettingStd))},
	}
}

func setByJSON(s mill.SetBy) string {
	switch s {
	case mill.SetByPressure, mill.SetByTorque, mill.SetByTurns, mill.SetBySpring:
		return string(s)
	}
	return "unknown"
}

func holdJSON(h mill.Hold) string {
	switch h {
	case mill.HoldMaintained, mill.HoldLocked:
		return string(h)
	}
	return "not stated"
}

func cycleJSON(c analyze.Cycle, by setBy) object {
	return object{
		{"role", string(c.Role)}, {"top", by.inSetting(number(c.TopSI))},
		{"zero_m", estimateJSON(c.Zero)}, {"zero_from", clean(c.ZeroFrom, nameLength)},
		{"return_m", estimateJSON(c.ReturnM)}, {"reversal", by.inSetting(estimateJSON(c.ReversalSI))},
		{"rate_per_s", by.inSetting(given(c.RateSI))}, {"seating_end", by.inSetting(given(c.SeatingEndSI))},
		{"straight_to", by.inSetting(given(c.StopSI))}, {"slope_ratio_above", number(c.StopRatio)},
		{"rising", fitJSON(c.Rising, by)}, {"falling", fitJSON(c.Falling, by)},
	}
}

// fitJSON is the line of one branch of one cycle, stretch in m over setting;
// null where it was not fitted.
func fitJSON(f analyze.Fit, by setBy) any {
	if f.Points == 0 {
		return nil
	}
	return object{
		{"points", f.Points}, {"low", by.inSetting(number(f.LowSI))}, {"high", by.inSetting(number(f.HighSI))},
		{"intercept_m", number(f.Line.A)}, {"slope_m_per", by.inSetting(number(f.Line.B))},
		{"residual_std_m", number(f.Line.ResidualSD)}, {"method", clean(string(f.Method), nameLength)},
		{"outliers", f.Outliers}, {"dependence", given(f.Dependence)},
		{"shape", shapeJSON(f.Shape)}, {"bend", estimateJSON(f.Bend)},
	}
}

// stepJSON is a jump of the stretch; cycle counts from 1, null outside any.
func stepJSON(s analyze.Step) object {
	var cycle any
	if s.Cycle >= 0 {
		cycle = s.Cycle + 1
	}
	return object{{"at_s", number(s.T)}, {"cycle", cycle}, {"size_m", estimateJSON(s.SizeM)}, {"kind", clean(string(s.Kind), nameLength)}}
}

func lagJSON(l analyze.Lag, by setBy) object {
	return object{
		{"late_s", estimateJSON(l.LateS)}, {"corrected", l.Corrected}, {"rate_per_s", by.inSetting(given(l.RateSI))},
		{"half_width_it_could_be", by.inSetting(estimateJSON(l.CouldBeSI))},
		{"half_width_without_rate", by.inSetting(estimateJSON(l.StaticSI))}, {"half_width_per_rate_s", estimateJSON(l.PerRateS)},
	}
}

func shapeJSON(s estimate.Shape) string {
	switch s {
	case estimate.Straight, estimate.Curved:
		return string(s)
	}
	return string(estimate.Unsettled)
}

func branchJSON(b analyze.Branch, by setBy) object {
	return object{
		{"stress_at_zero_setting_pa", estimateJSON(b.Stress0)}, {"slope_pa_per", by.inSetting(estimateJSON(b.Slope))},
		{"low", by.inSetting(number(b.LowSI))}, {"high", by.inSetting(number(b.HighSI))},
		{"low_stress_pa", number(b.LowPa)}, {"high_stress_pa", number(b.HighPa)}, {"cycles", b.Cycles},
	}
}

func targetJSON(t analyze.TargetSetting, by setBy) object {
	return object{
		{"fitted_curve", by.inSetting(estimateJSON(t.SettingSI))},
		{"next_setting", by.inSetting(estimateJSON(t.NextSI))},
		{"true_stress", by.inSetting(estimateJSON(t.TrueSI))},
		{"stress_at_setting_pa", estimateJSON(t.StressPa)},
		{"true_stress_budget", budgetJSON(t.Budget, func(std float64) any { return by.inSetting(number(std)) })},
	}
}

// budgetJSON is the lines of a budget, their standard uncertainties as std writes
// them.
func budgetJSON(terms []analyze.Term, std func(float64) any) []object {
	return each(terms, func(t analyze.Term) object {
		return object{
			{"name", clean(t.Name, nameLength)}, {"std", std(t.StdSI)}, {"dof", number(t.DoF)},
			{"type", clean(t.Type, nameLength)}, {"from", clean(t.From, textLength)},
		}
	})
}

func frictionJSON(r *analyze.Result) object {
	f := r.Friction
	area, ratio := f.AreaM2, f.AreaRatio
	if r.Setup.Tensioner.SetBy != mill.SetByPressure {
		area = estimate.Unknown("the tensioner is not set by pressure")
		ratio = area
	}
	return object{
		{"f0_n", estimateJSON(f.F0N)}, {"mu", estimateJSON(f.Mu)}, {"weight_n", estimateJSON(f.WeightN)},
		{"f0_plus_mu_weight_n", estimateJSON(f.F0MuWN)}, {"area_m2", estimateJSON(area)},
		{"area_ratio", estimateJSON(ratio)}, {"f0_budget", budgetJSON(f.F0Budget, number)},
	}
}

func runningJSON(b analyze.RunningBand) object {
	side := func(s [2]estimate.Estimate) object {
		return object{{"lowest_change_pa", estimateJSON(s[0])}, {"highest_change_pa", estimateJSON(s[1])}}
	}
	return object{
		{"after_rising", side(b.AfterRisingPa)}, {"after_falling", side(b.AfterFallingPa)},
		{"middle_pa", estimateJSON(b.MiddlePa)}, {"hold", holdJSON(b.Hold)},
	}
}

func tableJSON(r *analyze.Result, by setBy) []object {
	return each(rowsOf(r, unitsFor(r.Setup.Tensioner, mill.SI)).Rows, func(row roundRow) object {
		return object{
			{"at", by.inSetting(number(row.SettingSI))},
			{"rising_stress_pa", estimateJSON(row.risingE)}, {"falling_stress_pa", estimateJSON(row.fallingE)},
		}
	})
}
