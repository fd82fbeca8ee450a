package estimate

import (
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"
)

var writeTable = flag.Bool("table", false, "make the tables of testdata anew")

// efficient is one row of the table of efficiency.
type efficient struct {
	ramped
	bound, plain float64 // variance of the slope over the Cramer-Rao bound, and over plain least squares
	bias         float64 // of the slope
	methods      map[Method]int
}

// efficiency draws n ramps and fits each with FitBranch, stated nine tenths of
// the noise, and with plain least squares through the middles of the counts.
func efficiency(t *testing.T, c ramped, n int, seed uint64) efficient {
	r := rand.New(rand.NewPCG(seed, uint64(c.noise*1000+c.count)))
	out := efficient{ramped: c, methods: map[Method]int{}}
	var ours, bound, plain float64
	for range n {
		d, a, b := c.draw(r)
		c.state(&d, 0.9)
		f, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		mid := make([]float64, len(d.X))
		for i := range mid {
			mid[i] = (d.Lo[i] + d.Hi[i]) / 2
		}
		l, err := FitLine(d.X, mid)
		if err != nil {
			t.Fatal(err)
		}
		ours += (f.B - b) * (f.B - b)
		plain += (l.B - b) * (l.B - b)
		bound += c.bound(d, a, b)
		out.bias += (f.B - b) / b / float64(n)
		out.methods[f.Method]++
	}
	out.bound, out.plain = ours/bound, ours/plain
	return out
}

// efficiencyCases: noise from 0.3 of the change a reading on, and the case for
// which the limits against least squares are asked.
func efficiencyCases() []ramped {
	return []ramped{
		{count: 47, noise: 0.24, step: 0.8}, {count: 47, noise: 0.8, step: 0.8}, {count: 47, noise: 2.4, step: 0.8},
		{count: 47, noise: 2.4, step: 0.8, inX: true},
		{count: 37, noise: 1.35, step: 2.7}, {count: 4.7, noise: 1.2, step: 2.7}, {count: 2, noise: 2.4, step: 0.8},
	}
}

const efficiencySeed, efficiencyRamps = 71, 600 // the tests of the estimators use other seeds

// TestTableOfEfficiency writes testdata/efficiency.txt with -table, and draws
// few ramps else. The variance is to be 1.25 of the bound at most; at 0.0005 in,
// 2.4 psi of noise of the setting and 0.8 psi a reading 0.4 of least squares at most.
func TestTableOfEfficiency(t *testing.T) {
	n := trials(16)
	if *writeTable {
		n = efficiencyRamps
	}
	var text strings.Builder
	fmt.Fprintf(&text, `Variance of a branch's slope, by FitBranch, over what is possible and over plain
least squares on the same readings.

  go test ./analyze/estimate -run TestTableOfEfficiency -table -timeout 30m

%d ramps a row, seed %d, from 120 to 860 psi; slope and place of the counts drawn
for each. count, noise and change from reading to reading in psi of setting: 0.0005
in on 20 in is 47, 0.01 mm 37, 0.00005 in 4.7. The noise is the stretch's before
it is rounded, or the setting's. bound: Cramer-Rao, of the quantised problem with
the noise the stretch's and known. Relative standard error of a ratio about %.2f.

 count  noise  change  noise of   / bound  / least squares  bias, %%   fitted by
`, n, efficiencySeed, math.Sqrt(2/float64(n)))
	for _, c := range efficiencyCases() {
		e := efficiency(t, c, n, efficiencySeed)
		of, bound := "stretch", fmt.Sprintf("%.2f", e.bound)
		if c.inX {
			of, bound = "setting", "-"
		}
		fmt.Fprintf(&text, "%6.1f %6.2f %7.1f  %-8s %9s %16.2f %8.4f   %s\n", c.count, c.noise, c.step, of, bound, e.plain, 100*e.bias, methodsOf(e.methods))
		slack := 1 + 4*math.Sqrt(2/float64(n))
		if !c.inX && !(e.bound < 1.25*slack) {
			t.Errorf("%+v: variance %.3f of the bound in %d ramps", c, e.bound, n)
		}
		if c.inX && !(e.plain < 0.4*slack) {
			t.Errorf("%+v: variance %.3f of least squares in %d ramps", c, e.plain, n)
		}
	}
	t.Log("\n" + text.String())
	if *writeTable {
		if err := os.WriteFile("testdata/efficiency.txt", []byte(text.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func methodsOf(count map[Method]int) string {
	var parts []string
	for _, m := range []Method{ByBoth, ByLikelihood, ByFeasible} {
		if count[m] > 0 {
			parts = append(parts, fmt.Sprintf("%s %d", m, count[m]))
		}
	}
	return strings.Join(parts, ", ")
}
