package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// checker holds a schema and checks values against the part of draft 2020-12
// that it uses. A keyword that it does not know is an error: nothing in the
// schema may go unchecked.
type checker struct{ defs map[string]any }

func newChecker(t testing.TB) (checker, map[string]any) {
	t.Helper()
	var root map[string]any
	if err := json.Unmarshal(Schema(), &root); err != nil {
		t.Fatal(err)
	}
	return checker{root["$defs"].(map[string]any)}, root
}

func (c checker) check(at string, schema map[string]any, value any) error {
	for word, want := range schema {
		var err error
		switch word {
		case "description", "title", "$schema", "$id", "$defs", "properties":
		case "$ref":
			name := strings.TrimPrefix(want.(string), "#/$defs/")
			err = c.check(at, c.defs[name].(map[string]any), value)
		case "type":
			err = checkType(at, want, value)
		case "enum":
			if !slices.Contains(want.([]any), value) {
				err = fmt.Errorf("%s: %v is none of %v", at, value, want)
			}
		case "required":
			for _, name := range want.([]any) {
				if _, ok := value.(map[string]any)[name.(string)]; !ok {
					err = fmt.Errorf("%s lacks %v", at, name)
				}
			}
		case "additionalProperties":
			err = c.checkMembers(at, schema, value)
		case "minProperties", "maxProperties":
			n := float64(len(value.(map[string]any)))
			if word == "minProperties" && n < want.(float64) || word == "maxProperties" && n > want.(float64) {
				err = fmt.Errorf("%s has %v members", at, n)
			}
		case "items":
			for i, item := range value.([]any) {
				if err == nil {
					err = c.check(fmt.Sprintf("%s[%d]", at, i), want.(map[string]any), item)
				}
			}
		case "oneOf":
			err = c.checkOneOf(at, want.([]any), value)
		default:
			err = fmt.Errorf("%s: the checker does not know %q", at, word)
		}
		if err != nil {
			return err
		}
	}
	return nil
}

func checkType(at string, want, value any) error {
	names, ok := want.([]any)
	if !ok {
		names = []any{want}
	}
	is := "null"
	switch v := value.(type) {
	case bool:
		is = "boolean"
	case string:
		is = "string"
	case []any:
		is = "array"
	case map[string]any:
		is = "object"
	case float64:
		is = "number"
		if v == math.Trunc(v) && slices.Contains(names, any("integer")) {
			is = "integer"
		}
	}
	if !slices.Contains(names, any(is)) {
		return fmt.Errorf("%s is %s, want %v", at, is, want)
	}
	return nil
}

// checkMembers demands that every member is described, and checks it.
func (c checker) checkMembers(at string, schema map[string]any, value any) error {
	members, ok := value.(map[string]any)
	if !ok || schema["additionalProperties"] != false {
		return fmt.Errorf("%s: not a closed object", at)
	}
	for name, v := range members {
		described, ok := schema["properties"].(map[string]any)[name]
		if !ok {
			return fmt.Errorf("%s.%s is not in the schema", at, name)
		}
		if err := c.check(at+"."+name, described.(map[string]any), v); err != nil {
			return err
		}
	}
	return nil
}

func (c checker) checkOneOf(at string, choices []any, value any) error {
	var errs []error
	for _, choice := range choices {
		if err := c.checkChoice(at, choice.(map[string]any), value); err != nil {
			errs = append(errs, err)
		}
	}
	if len(choices)-len(errs) != 1 {
		return fmt.Errorf("%s fits %d of %d: %v", at, len(choices)-len(errs), len(choices), errs)
	}
	return nil
}

// checkChoice checks the type first, so that the other words need not.
func (c checker) checkChoice(at string, choice map[string]any, value any) error {
	if err := checkType(at, choice["type"], value); err != nil {
		return err
	}
	return c.check(at, choice, value)
}

func decoded(t testing.TB, r *analyze.Result, m Meta) map[string]any {
	t.Helper()
	var value map[string]any
	if err := json.Unmarshal(written(t, func(b *bytes.Buffer) error { return JSON(b, r, m) }), &value); err != nil {
		t.Fatal(err)
	}
	return value
}

func TestJSONFollowsItsSchema(t *testing.T) {
	c, root := newChecker(t)
	torn := t1Meta()
	torn.Outcome, torn.TailBytes, torn.ClockFactor = "torn", 4096, 60
	for name, value := range map[string]map[string]any{
		"T-1":          decoded(t, t1(t), t1Meta()),
		"torn":         decoded(t, t1(t), torn),
		"no zero":      decoded(t, withoutZero(t), t1Meta()),
		"nothing":      decoded(t, blank(mill.SetByPressure), Meta{}),
		"torque":       decoded(t, blank(mill.SetByTorque), Meta{}),
		"turns":        decoded(t, blank(mill.SetByTurns), Meta{}),
		"spring":       decoded(t, blank(mill.SetBySpring), Meta{}),
		"unknown kind": decoded(t, blank("steam"), Meta{Outcome: "well"}),
	} {
		if err := c.check(name, root, value); err != nil {
			t.Error(err)
		}
	}
}

func TestTheCheckerRefuses(t *testing.T) {
	c, root := newChecker(t)
	raw := written(t, func(b *bytes.Buffer) error { return JSON(b, t1(t), t1Meta()) })
	for name, spoil := range map[string]func(v map[string]any){
		"a missing member":    func(v map[string]any) { delete(v, "grade") },
		"a strange member":    func(v map[string]any) { v["colour"] = "blue" },
		"a wrong type":        func(v map[string]any) { v["grade"] = 3.0 },
		"a wrong word":        func(v map[string]any) { v["grade"] = "fine" },
		"a wrong version":     func(v map[string]any) { v["schema_version"] = 2.0 },
		"a fraction":          func(v map[string]any) { v["recording"].(map[string]any)["bytes_after_seal"] = 0.5 },
		"half an estimate":    func(v map[string]any) { delete(v["half_width_ratio"].(map[string]any), "dof") },
		"a mixed estimate":    func(v map[string]any) { v["half_width_ratio"].(map[string]any)["unknown"] = "why" },
		"two dimensions":      func(v map[string]any) { v["setup"].(map[string]any)["limit"].(map[string]any)["setting_m"] = 1.0 },
		"a setting of none":   func(v map[string]any) { delete(v["setup"].(map[string]any)["limit"].(map[string]any), "setting_pa") },
		"a number for a text": func(v map[string]any) { v["cautions"].([]any)[0] = 1.0 },
	} {
		var v map[string]any
		if err := json.Unmarshal(raw, &v); err != nil {
			t.Fatal(err)
		}
		spoil(v)
		if c.check("result", root, v) == nil {
			t.Errorf("%s passes", name)
		}
	}
}

// Every number of the schema says its unit, in its own description or, inside an
// estimate, by the member that holds it.
func TestEveryNumberNamesItsUnit(t *testing.T) {
	_, root := newChecker(t)
	units := []string{"N per m", " Pa", " m.", " m;", " m2", " N.", " N;", " N,", " N m", " J.", " rad", "count", "bare number", "same unit", "unit of the member", "unit of the dial", "SI unit", "of setting."}
	var walk func(at string, v any)
	numbers := 0
	walk = func(at string, v any) {
		switch v := v.(type) {
		case []any:
			for i, item := range v {
				walk(fmt.Sprintf("%s[%d]", at, i), item)
			}
		case map[string]any:
			if strings.HasSuffix(at, ".properties") || strings.HasSuffix(at, ".$defs") { // names, not words of the schema
				for name, item := range v {
					walk(at+"."+name, item)
				}
				return
			}
			kind := fmt.Sprint(v["type"])
			isNumber := strings.Contains(kind, "number") || strings.Contains(kind, "integer") || v["$ref"] == "#/$defs/estimate"
			says, _ := v["description"].(string)
			if isNumber {
				numbers++
				if !slices.ContainsFunc(units, func(u string) bool { return strings.Contains(says, u) }) {
					t.Errorf("%s: %q names no unit", at, says)
				}
			}
			if kind != "<nil>" && says == "" && kind != "null" {
				t.Errorf("%s has no description", at)
			}
			for name, item := range v {
				walk(at+"."+name, item)
			}
		}
	}
	walk("schema", root)
	if numbers < 40 {
		t.Errorf("only %d numbers looked at", numbers)
	}
}

func TestEstimatesInJSON(t *testing.T) {
	for _, c := range []struct {
		name string
		e    estimate.Estimate
		want string
	}{
		{"known", estimate.Estimate{Value: 2, Random: 1, DoF: 2, Method: "mean"}, `"dof":2`},
		{"infinite degrees of freedom", estimate.Estimate{Value: 2, Random: 1, DoF: math.Inf(1), Method: "mean"}, `"dof":null`},
		{"not known", estimate.Unknown("no zero"), `{"unknown":"no zero"}`},
		{"zero value", estimate.Estimate{}, `{"unknown":"no reason was given"}`},
		{"not a number", estimate.Estimate{Value: math.NaN(), Method: "mean"}, `{"unknown":"the computation gave no finite number"}`},
		{"infinite doubt", estimate.Estimate{Value: 1, Random: math.Inf(1), Method: "mean"}, `{"unknown":"the computation gave no finite uncertainty"}`},
	} {
		raw, err := json.Marshal(estimateJSON(c.e))
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
		}
		if !strings.Contains(string(raw), c.want) {
			t.Errorf("%s: %s, want %s", c.name, raw, c.want)
		}
	}
}

func TestJSONNamesTheRecordingAndTheDimension(t *testing.T) {
	v := decoded(t, t1(t), t1Meta())
	rec := v["recording"].(map[string]any)
	if rec["file"] != "quillfern-t1.ramp" || rec["seal"] != t1Meta().Seal || rec["outcome"] != "complete" || v["program"] != "tautramp 0.1" {
		t.Errorf("recording %v by %v", rec, v["program"])
	}
	for by, member := range map[mill.SetBy]string{
		mill.SetByPressure: "setting_pa", mill.SetByTorque: "setting_n_m", mill.SetByTurns: "setting_rad", mill.SetBySpring: "setting_m",
	} {
		r := blank(by)
		r.Setup.LimitSI = 7
		limit := decoded(t, r, Meta{})["setup"].(map[string]any)["limit"].(map[string]any)
		if limit[member] != 7.0 {
			t.Errorf("%s: limit %v, want %s 7", by, limit, member)
		}
	}
}
