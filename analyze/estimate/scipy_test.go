package estimate

import (
	"bytes"
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"testing"
)

// problem is one random calibration: points with doubt in both variables.
type problem struct {
	X  []float64 `json:"x"`
	Y  []float64 `json:"y"`
	UX []float64 `json:"ux"`
	UY []float64 `json:"uy"`
}

// answer is what SciPy says of it.
type answer struct {
	Line  [4]float64 `json:"line"`  // intercept, slope, their standard errors: stats.linregress
	Sen   [4]float64 `json:"sen"`   // slope, intercept by medians, low, high: stats.theilslopes
	Both  [4]float64 `json:"both"`  // intercept, slope: optimize.least_squares of the effective variance; their standard errors unscaled: odr
	Chi2  float64    `json:"chi2"`  // of the latter
	Cubic []float64  `json:"cubic"` // coefficients from the constant on: linalg.lstsq
}

// askSciPy reads problems from standard input, an answer a line out.
const askSciPy = `
import json, sys
import numpy as np
from scipy import linalg, odr, optimize, stats
for p in json.load(sys.stdin):
    x, y, ux, uy = (np.array(p[k]) for k in ("x", "y", "ux", "uy"))
    r = stats.linregress(x, y)
    s = stats.theilslopes(y, x)
    start = [r.intercept, r.slope]
    out = odr.ODR(odr.RealData(x, y, ux, uy), odr.unilinear, beta0=start[::-1], sstol=1e-15, partol=1e-15, maxit=1000).run()
    sd = np.sqrt(np.diag(out.cov_beta))
    rest = lambda b: (y - b[0] - b[1] * x) / np.sqrt(uy**2 + b[1]**2 * ux**2)
    best = optimize.least_squares(rest, out.beta[::-1], method="lm", xtol=1e-15, ftol=1e-15, gtol=1e-15)
    c = linalg.lstsq(np.vander(x, 4, increasing=True), y)[0]
    print(json.dumps({
        "line": [r.intercept, r.slope, r.intercept_stderr, r.stderr],
        "sen": [s[0], s[1], s[2], s[3]],
        "both": [best.x[0], best.x[1], sd[1], sd[0]], "chi2": 2 * best.cost, "cubic": list(c)}))
`

// randomProblems are of 5 to 40 points, slopes and offsets over some powers of
// ten, no two alike.
func randomProblems(n int) []problem {
	r := rand.New(rand.NewPCG(2026, 12))
	out := make([]problem, n)
	for k := range out {
		p := &out[k]
		a, b := 100*r.NormFloat64(), math.Exp(2*r.NormFloat64())*math.Copysign(1, r.NormFloat64())
		span := math.Exp(2 * r.NormFloat64())
		for range 5 + r.IntN(36) {
			x := span * r.Float64()
			ux, uy := 0.03*span*(0.5+r.Float64()), 0.05*span*math.Abs(b)*(0.5+r.Float64())
			p.X, p.UX = append(p.X, x+ux*r.NormFloat64()), append(p.UX, ux)
			p.Y, p.UY = append(p.Y, a+b*x+uy*r.NormFloat64()), append(p.UY, uy)
		}
	}
	return out
}

// sciPy answers the problems, or skips the test with the reason; a skip is a
// failure where TAUTRAMP_STRICT is 1.
func sciPy(t *testing.T, problems []problem) []answer {
	t.Helper()
	const python = "/usr/bin/python3"
	if err := exec.Command(python, "-c", "import scipy.odr").Run(); err != nil {
		if os.Getenv("TAUTRAMP_STRICT") == "1" {
			t.Fatalf("SciPy is not here: apt-get install python3-scipy: %v", err)
		}
		t.Skipf("SciPy is not here (apt-get install python3-scipy): %v", err)
	}
	in, err := json.Marshal(problems)
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(python, "-c", askSciPy)
	cmd.Stdin = bytes.NewReader(in)
	var said bytes.Buffer
	cmd.Stderr = &said
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("%v: %s", err, said.String())
	}
	var answers []answer
	for d := json.NewDecoder(bytes.NewReader(out)); d.More(); {
		var a answer
		if err := d.Decode(&a); err != nil {
			t.Fatal(err)
		}
		answers = append(answers, a)
	}
	return answers
}

func TestSciPySaysTheSameOf200Problems(t *testing.T) {
	problems := randomProblems(200)
	answers := sciPy(t, problems)
	if len(answers) != len(problems) {
		t.Fatalf("%d answers to %d problems", len(answers), len(problems))
	}
	for k, p := range problems {
		want := answers[k]
		same := func(what string, got, want, scale, tolerance float64) {
			if !(math.Abs(got-want) <= tolerance*math.Max(math.Abs(want), scale)) {
				t.Errorf("problem %d, %s: %.15g, SciPy has %.15g", k, what, got, want)
			}
		}
		l, err := FitLine(p.X, p.Y)
		if err != nil {
			t.Fatal(err)
		}
		offset := math.Abs(l.A) + math.Abs(l.B)*Quantile(p.X, 1)
		same("intercept", l.A, want.Line[0], offset, 1e-11)
		same("slope", l.B, want.Line[1], 0, 1e-10)
		same("intercept's error", math.Sqrt(l.VarA), want.Line[2], 0, 1e-9)
		same("slope's error", math.Sqrt(l.VarB), want.Line[3], 0, 1e-9)
		m, err := TheilSen(p.X, p.Y)
		if err != nil {
			t.Fatal(err)
		}
		same("median slope", m.Slope, want.Sen[0], 0, 1e-12)
		same("its line by the medians", m.AtMedians, want.Sen[1], offset, 1e-12)
		same("its low end", m.Low, want.Sen[2], 0, 1e-12)
		same("its high end", m.High, want.Sen[3], 0, 1e-12)
		b, err := FitBoth(p.X, p.UX, p.Y, p.UY)
		if err != nil {
			t.Fatal(err)
		}
		same("both, intercept", b.A, want.Both[0], offset, 1e-7)
		same("both, slope", b.B, want.Both[1], 0, 1e-6)
		same("both, chi2", b.ResidualSD*b.ResidualSD*b.DoF, want.Chi2, 0, 1e-10)
		// Its errors are of the linearised problem at the adjusted points, as ours.
		same("both, intercept's error", math.Sqrt(b.VarA), want.Both[2], 0, 0.02)
		same("both, slope's error", math.Sqrt(b.VarB), want.Both[3], 0, 0.02)
		q, err := FitPolynomial(p.X, p.Y, 3)
		if err != nil {
			t.Fatal(err)
		}
		for i := range q.Coef {
			same("cubic", q.Coef[i], want.Cubic[i], math.Abs(q.Coef[i]), 1e-6)
		}
	}
}
