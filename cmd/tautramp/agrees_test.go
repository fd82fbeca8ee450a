package main

import (
	"encoding/json"
	"math"
	"os"

	"github.com/rogpeppe/go-internal/testscript"
)

// jsonEstimate is an estimate as result.schema.json describes it.
type jsonEstimate struct {
	Value  float64 `json:"value"`
	Random float64 `json:"random_std"`
	Low    float64 `json:"interval95_low"`
	High   float64 `json:"interval95_high"`
}

type jsonResult struct {
	Target struct {
		Rising  jsonTarget `json:"rising"`
		Falling jsonTarget `json:"falling"`
	} `json:"target"`
	Friction struct {
		F0 jsonEstimate `json:"f0_n"`
		Mu jsonEstimate `json:"mu"`
	} `json:"friction"`
}

type jsonTarget struct {
	True struct {
		Setting jsonEstimate `json:"setting_pa"`
	} `json:"true_stress"`
}

// agrees compares a result with what is planted in T-1 with QW-6, the invented
// demo mill: 724 and 621 psi for 9,500 psi of band stress, F0 210 lbf,
// mu 0.045. Settings within 1 % and their intervals, random part under 1.5 %,
// friction within 5 %.
func agrees(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: agrees RESULT.json")
	}
	data, err := os.ReadFile(ts.MkAbs(args[0]))
	ts.Check(err)
	var r jsonResult
	ts.Check(json.Unmarshal(data, &r))
	const lbf = 4.4482216152605 // N, exact
	for _, c := range []struct {
		what    string
		got     jsonEstimate
		planted float64
		part    float64
	}{
		{"rising setting", r.Target.Rising.True.Setting, 724 * psi, 0.01},
		{"falling setting", r.Target.Falling.True.Setting, 621 * psi, 0.01},
		{"F0", r.Friction.F0, 210 * lbf, 0.05},
		{"mu", r.Friction.Mu, 0.045, 0.05},
	} {
		ts.Logf("%s: %.6g, planted %.6g (%+.2f %%)", c.what, c.got.Value, c.planted, (c.got.Value/c.planted-1)*100)
		if math.Abs(c.got.Value/c.planted-1) > c.part || c.planted < c.got.Low || c.planted > c.got.High {
			ts.Fatalf("%s is %.6g, 95 %% from %.6g to %.6g; planted is %.6g", c.what, c.got.Value, c.got.Low, c.got.High, c.planted)
		}
		if c.part == 0.01 && 2*c.got.Random/c.got.Value > 0.015 {
			ts.Fatalf("%s: random part %.2f %%", c.what, 200*c.got.Random/c.got.Value)
		}
	}
}
