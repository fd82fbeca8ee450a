package report

import (
	"bytes"
	_ "embed"
	"encoding/csv"
	"encoding/json"
	"io"
	"strconv"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

//go:embed bench.schema.json
var benchSchemaJSON string

// BenchSchema is the JSON Schema (draft 2020-12) of what BenchJSON writes. The
// caller owns the bytes.
func BenchSchema() []byte { return []byte(benchSchemaJSON) }

// BenchJSON writes every figure of a bench result, SI, after the schema that
// BenchSchema returns; the same result gives the same bytes. Errors are the
// writer's.
func BenchJSON(w io.Writer, r *gauge.Result, m Meta) error {
	var b bytes.Buffer
	out := json.NewEncoder(&b)
	out.SetEscapeHTML(false)
	out.SetIndent("", "  ")
	if err := out.Encode(benchJSON(r, m)); err != nil {
		return err
	}
	_, err := w.Write(b.Bytes())
	return err
}

func benchJSON(r *gauge.Result, m Meta) object {
	t := r.Test
	return object{
		{"schema_version", schemaVersion},
		{"program", clean(m.Program, nameLength)},
		{"recording", benchRecordingJSON(r, m)},
		{"unit", siUnit(benchDim(t.Plan))},
		{"tested", instrumentJSON(t.Instruments.Tested)},
		{"reference", instrumentJSON(t.Instruments.Reference)},
		{"conditions", object{
			{"day", clean(t.Conditions.Day, nameLength)}, {"place", clean(t.Conditions.Place, nameLength)}, {"by", clean(t.Conditions.By, nameLength)},
			{"medium", clean(t.Conditions.Medium, nameLength)}, {"height_m", heightJSON(t.Conditions.Height)},
			{"temperature_c", estimateJSON(t.Conditions.Temperature)}, {"note", clean(t.Conditions.Note, textLength)},
		}},
		{"plan", planJSON(t.Plan)},
		{"missing_points", r.Missing},
		{"limit", limitJSON(r)},
		{"rule", object{{"name", r.Rule.Name}, {"guard_of_u", number(r.Rule.Guard)}, {"source", r.Rule.Source}, {"from_memory", r.Rule.Memory}}},
		{"verdict", verdictJSON(r.Verdict)},
		{"series", each(r.Curves, curveJSON)},
		{"figures", figuresJSON(r)},
		{"linearity", object{
			{"independent", straightJSON(r.Conformity.Independent)}, {"terminal_based", straightJSON(r.Conformity.Terminal)},
			{"zero_based", straightJSON(r.Conformity.ZeroBased)}, {"least_squares", straightJSON(r.Conformity.LeastSquares)},
		}},
		{"flow_rule", object{
			{"error", estimateJSON(r.Flow.Error)}, {"hysteresis", estimateJSON(r.Flow.Hysteresis)},
			{"repeatability", estimateJSON(r.Flow.Repeatability)}, {"combined", estimateJSON(r.Flow.Combined)}, {"pairs", r.Flow.Pairs},
		}},
		{"force_rule", object{
			{"reproducibility_percent", estimateJSON(r.Force.Reproducibility)}, {"repeatability_percent", estimateJSON(r.Force.Repeatability)},
			{"interpolation_percent", estimateJSON(r.Force.Interpolation)}, {"zero_return_percent", estimateJSON(r.Force.ZeroReturn)},
			{"reversibility_percent", estimateJSON(r.Force.Reversibility)}, {"class", r.Force.Class},
			{"lower_limit", given(r.Force.LowerLimitSI)}, {"class_aa_from", given(r.Force.ClassAA)}, {"class_a_from", given(r.Force.ClassA)},
		}},
		{"correction", benchRecordJSON(r)},
		{"warnings", each(r.Warnings, func(w gauge.Warning) object {
			return object{{"code", clean(w.Code, nameLength)}, {"text", clean(w.Text, textLength)}}
		})},
		{"not_checked", texts(r.NotChecked)},
		{"cautions", benchCautions()},
	}
}

func benchDim(p gauge.Plan) mill.Dim {
	if len(p.Points) > 0 {
		return p.Points[0].Unit.Dim
	}
	return p.Dim()
}

func siUnit(d mill.Dim) string {
	switch d {
	case mill.DimLength:
		return "m"
	case mill.DimForce:
		return "N"
	case mill.DimTorque:
		return "N m"
	case mill.DimAngle:
		return "rad"
	}
	return "Pa"
}

func heightJSON(h mill.Length) any {
	if !h.Given() {
		return nil
	}
	return number(h.SI)
}

func benchRecordingJSON(r *gauge.Result, m Meta) object {
	var started any
	if !m.Started.IsZero() {
		started = m.Started.Format(time.RFC3339Nano)
	}
	return object{
		{"file", m.base()}, {"seal", clean(m.Seal, sealLength)}, {"outcome", outcomeJSON(m.Outcome)},
		{"recorder", clean(m.Recorder, nameLength)}, {"started", started}, {"continues", clean(m.Continues, sealLength)},
		{"rehearsal", r.Test.Conditions.Simulated || m.scaled()}, {"notes", texts(m.Notes)},
	}
}

func instrumentJSON(i mill.Instrument) object {
	return object{
		{"name", clean(i.Name, nameLength)}, {"serial", clean(i.Serial, nameLength)},
		{"limit", given(i.Limit.SI)}, {"due", clean(i.Due, nameLength)},
	}
}

func planJSON(p gauge.Plan) object {
	marks := make([]string, 0, len(p.Points))
	for _, q := range p.Points {
		marks = append(marks, q.Entered)
	}
	return object{
		{"name", clean(p.Name, nameLength)}, {"kind", string(p.Kind)}, {"low", number(p.Low.SI)}, {"high", number(p.High.SI)},
		{"marks", marks}, {"falling_too", p.Down}, {"repeats", p.Repeats}, {"mountings", p.Runs}, {"exercise_cycles", p.Exercise},
	}
}

func limitJSON(r *gauge.Result) object {
	l := r.Limit
	return object{
		{"name", clean(l.Name, textLength)}, {"origin", string(l.Origin)}, {"hysteresis_origin", string(l.HystOrigin)},
		{"from_memory", l.Origin == gauge.FromMemory || l.HystOrigin == gauge.FromMemory}, {"source", clean(l.Source, textLength)},
	}
}

func verdictJSON(v gauge.Verdict) object {
	return object{
		{"outcome", v.Outcome.String()}, {"least_chance", number(v.Chance)}, {"why", texts(v.Why)},
		{"checks", each(v.Checks, func(c gauge.Check) object {
			return object{
				{"what", c.What}, {"series", string(c.Series)}, {"mark", c.Nominal.Entered}, {"value", estimateJSON(c.Value)},
				{"limit", number(c.LimitSI)}, {"limit_origin", string(c.Origin)}, {"expanded", number(c.Expanded)}, {"accept", number(c.Accept)},
				{"chance", number(c.Chance)}, {"outcome", c.Outcome.String()},
			}
		})},
	}
}

func curveJSON(c gauge.Curve) object {
	return object{
		{"series", string(c.Series)}, {"scatter", scatterJSON(c.Scatter)},
		{"points", each(c.At, func(a gauge.At) object {
			return object{
				{"mark", a.Nominal.Entered}, {"nominal", number(a.Nominal.SI)}, {"reference", number(a.ReferenceSI)}, {"indicated", number(a.IndicatedSI)},
				{"error_up", estimateJSON(a.Up)}, {"error_down", estimateJSON(a.Down)}, {"error_mean", estimateJSON(a.Mean)},
				{"falling_less_rising", estimateJSON(a.UpDown)}, {"repeatability", estimateJSON(a.Repeatability)},
				{"reproducibility", estimateJSON(a.Reproducibility)}, {"tap_shift", estimateJSON(a.TapShift)},
				{"budget", termsJSON(a.Budget)},
				{"guide", object{
					{"deviation", number(a.Guide.DeviationSI)}, {"terms", termsJSON(a.Guide.Terms)}, {"expanded", number(a.Guide.ExpandedSI)},
					{"error_span", number(a.Guide.ErrorSpanSI)},
				}},
			}
		})},
	}
}

func scatterJSON(e estimate.Estimate) object {
	if why := unknownWhy(e); why != "" {
		return object{{"std", nil}, {"dof", nil}, {"from", why}}
	}
	return object{{"std", number(e.Value)}, {"dof", number(e.DoF)}, {"from", e.Method}}
}

func termsJSON(list []gauge.Term) []object {
	return each(list, func(t gauge.Term) object {
		return object{{"name", t.Name}, {"std", number(t.StdSI)}, {"dof", number(t.DoF)}, {"type", t.Type}, {"from", t.From}}
	})
}

func figuresJSON(r *gauge.Result) object {
	return object{
		{"span", number(r.SpanSI)}, {"largest_error", estimateJSON(r.Largest)}, {"error_at_lowest", estimateJSON(r.Lines.ZeroError)},
		{"error_of_span", estimateJSON(r.Lines.SpanError)}, {"zero_shift", estimateJSON(r.ZeroShift)},
		{"falling_less_rising_largest", estimateJSON(r.UpDown)}, {"falling_less_rising_mean", estimateJSON(r.MeanUpDown)},
		{"dead_band", estimateJSON(r.DeadBand)}, {"hysteresis_without_dead_band", estimateJSON(r.Hysteresis)}, {"tap_shift", estimateJSON(r.TapShift)},
	}
}

func straightJSON(s gauge.Straight) object {
	return object{{"intercept", number(s.Line.A)}, {"slope", number(s.Line.B)}, {"deviation", estimateJSON(s.Deviation)}}
}

func benchRecordJSON(r *gauge.Result) object {
	record := r.Record()
	return object{
		{"rule", "straight lines between the points; beyond the ends the last correction holds with twice its uncertainty"},
		{"due", clean(record.Due, nameLength)},
		{"points", each(record.Bench.Points, func(p mill.BenchPoint) object {
			falling := p.Falling
			if !falling.Given() {
				falling = p.Rising
			}
			return object{{"at", number(p.At.SI)}, {"add_rising", number(p.Rising.SI)}, {"add_falling", number(falling.SI)}, {"expanded", number(p.Uncertainty.SI)}}
		})},
	}
}

// BenchCSV writes one row for each point and series, like CSV: errors, the half
// of their 95 % intervals, limit and outcome, in the units of the instrument's
// scale. Errors are the writer's.
func BenchCSV(w io.Writer, r *gauge.Result, m Meta) error {
	u := benchUnitsOf(r)
	in := " (" + u.err.name + ")"
	records := [][]string{{
		"series", "mark (" + u.scale.name + ")", "error up" + in, "error up: 95 % half-width" + in, "error down" + in, "error down: 95 % half-width" + in,
		"falling less rising" + in, "limit of error" + in, "outcome", "limit", "limit from memory", "verdict", "instrument", "recording", "seal", "rehearsal",
	}}
	for _, t := range benchTables(r, u) {
		for _, row := range t.Rows {
			up, upHalf := csvFigure(row.Up)
			down, downHalf := csvFigure(row.Down)
			apart, _ := csvFigure(row.Apart)
			records = append(records, []string{
				t.Series, ungrouped(row.Mark), up, upHalf, down, downHalf, apart, ungrouped(row.Limit), row.Outcome,
				cellText(clean(r.Limit.Name, textLength)), strconv.FormatBool(benchVerdictOf(r, u).Memory), r.Verdict.Outcome.String(),
				cellText(instrumentText(r.Test.Instruments.Tested)), cellText(named(m.base(), notKnown)), cellText(m.seal()),
				strconv.FormatBool(r.Test.Conditions.Simulated || m.scaled()),
			})
		}
	}
	return csv.NewWriter(w).WriteAll(records)
}
