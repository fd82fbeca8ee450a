package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
	"tautramp/acquire/simrig/rigtest"
	"tautramp/analyze"
)

// t2 is the invented resaw T-2 with QN-17, set by whatever is said.
func t2(t testing.TB, by mill.SetBy) *analyze.Result {
	t.Helper()
	p := exampleProfile(t)
	tensioner := &p.Tensioners[1]
	switch tensioner.SetBy = by; by {
	case mill.SetByTurns:
		tensioner.SettingLimit.SI = 5 * 2 * math.Pi
	case mill.SetBySpring:
		tensioner.SettingLimit.SI = 68e-3
	}
	set, _, err := rigtest.Set(simrig.Config{Profile: p, Tensioner: "T-2", Band: "QN-17", Seed: 3})
	if err != nil {
		t.Fatal(err)
	}
	r, err := analyze.Analyze(analyze.Input{Profile: p, Tensioner: "T-2", Band: "QN-17", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func wholeText(t testing.TB, r *analyze.Result, s mill.System) string {
	t.Helper()
	var b bytes.Buffer
	if err := Text(&b, r, t1Meta(), s); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestTextOfOtherTensionersIsAsLastRead(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	if !exactHere() {
		t.Skip("the rig's noise is compared on linux/amd64 only")
	}
	for by, s := range map[mill.SetBy]mill.System{mill.SetByTorque: mill.SI, mill.SetByTurns: mill.US, mill.SetBySpring: mill.SI} {
		sameBytes(t, "t2-"+string(by)+".txt", []byte(wholeText(t, t2(t, by), s)))
	}
}

// The figures must be the same ones in the text, on the page and in JSON.
func TestEachKindOfTensionerIsReported(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	for by, words := range map[mill.SetBy][]string{
		mill.SetByTorque: {"Torque that lifts", "for each 1,000 band psi", "loosen the screw by half a turn", "Locks itself"},
		mill.SetByTurns:  {"One turn makes", "band psi a turn", "Turn lost at a reversal", "(springs, frame, tyres"},
		mill.SetBySpring: {"Rate of one spring", "spring length ", "in shorter"},
	} {
		r := t2(t, by)
		text := strings.Join(strings.Fields(wholeText(t, r, mill.US)), " ")
		page := htmlOf(t, r, t1Meta(), mill.US)
		for _, word := range words {
			if !strings.Contains(text, word) || !strings.Contains(string(page), word) {
				t.Errorf("%s: %q is not in the text (%v) or the page", by, word, strings.Contains(text, word))
			}
		}
		kind := decoded(t, r, t1Meta())["drivetrain"].(map[string]any)["kind"]
		if want := map[mill.SetBy]string{mill.SetByTorque: "screw", mill.SetByTurns: "turns", mill.SetBySpring: "spring"}[by]; kind != want {
			t.Errorf("%s: JSON says %v", by, kind)
		}
	}
}

func TestPredictionIsMarkedEverywhere(t *testing.T) {
	r := t1(t)
	band, err := exampleProfile(t).FindBand("QM-2")
	if err != nil {
		t.Fatal(err)
	}
	p, err := r.ForBand(band, mill.Pressure{})
	if err != nil {
		t.Fatal(err)
	}
	const mark = "PREDICTED, NOT MEASURED: worked out from the wheel pull measured with QW-6"
	text := strings.Join(strings.Fields(wholeText(t, p, mill.US)), " ")
	if !strings.Contains(text, mark) || !strings.Contains(string(htmlOf(t, p, t1Meta(), mill.US)), mark) {
		t.Errorf("text or page do not say %q", mark)
	}
	if strings.Contains(wholeText(t, r, mill.US), "PREDICTED") {
		t.Error("what was measured is called predicted")
	}
	var b bytes.Buffer
	if err := JSON(&b, p, t1Meta()); err != nil {
		t.Fatal(err)
	}
	var out struct {
		Predicted struct {
			Band  string `json:"measured_band"`
			Ratio struct{ Value float64 }
		}
		Bands []struct {
			Band, Within string
			Measured     bool
		}
	}
	if err := json.Unmarshal(b.Bytes(), &out); err != nil {
		t.Fatal(err)
	}
	if out.Predicted.Band != "QW-6" || len(out.Bands) != 3 || !out.Bands[0].Measured || out.Bands[1].Measured {
		t.Errorf("JSON has %+v", out)
	}
	var table bytes.Buffer
	if err := CSV(&table, p, t1Meta(), mill.US); err != nil {
		t.Fatal(err)
	}
	if rows := strings.SplitN(table.String(), "\n", 3); !strings.Contains(rows[0], "predicted from") || !strings.Contains(rows[1], "QW-6") {
		t.Errorf("the table's rows do not say what they are predicted from:\n%s\n%s", rows[0], rows[1])
	}
}
