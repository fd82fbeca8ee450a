package gauge

import (
	"bufio"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"tautramp/acquire/mill"
)

// columns reads a CSV file of testdata: remarks, one heading, numbers.
func columns(t *testing.T, file string) [][]float64 {
	t.Helper()
	f, err := os.Open(filepath.Join("testdata", file))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var cols [][]float64
	heading := true
	for s := bufio.NewScanner(f); s.Scan(); {
		if strings.HasPrefix(s.Text(), "#") {
			continue
		}
		fields := strings.Split(s.Text(), ",")
		if heading {
			heading, cols = false, make([][]float64, len(fields))
			continue
		}
		for i, field := range fields {
			v, err := strconv.ParseFloat(field, 64)
			if err != nil {
				t.Fatal(err)
			}
			cols[i] = append(cols[i], v)
		}
	}
	return cols
}

// near fails unless got is want within a relative tolerance.
func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g within %.0e", what, got, want, tolerance)
	}
}

// exact is a reading without spread.
func exact(si float64) Level { return Level{SI: si, N: 1} }

// pascals is a quantity for points made up in SI.
func pascals(t *testing.T, v float64) mill.Setting {
	t.Helper()
	return setting(t, strconv.FormatFloat(v, 'f', -1, 64)+" Pa")
}

// bench builds a test from readings in pascals: nominal points, and rows of a
// direction, run and repeat with one reading each.
type bench struct {
	t    *testing.T
	test Test
}

func newBench(t *testing.T, kind Kind, points ...float64) *bench {
	b := &bench{t: t, test: Test{Plan: Plan{Name: "made up", Kind: kind, Repeats: 1, Runs: 1, Down: true, Found: ByPress}}}
	for _, p := range points {
		b.test.Plan.Points = append(b.test.Plan.Points, pascals(t, p))
	}
	b.test.Plan.High = b.test.Plan.Points[len(points)-1]
	b.test.Instruments.Reference.Limit = pascals(t, 0.001)
	return b
}

// read adds a point: what was indicated where the reference stood at ref.
func (b *bench) read(index int, d Direction, run, repeat int, ref, indicated float64) {
	b.test.Points = append(b.test.Points, Point{
		Target:    Target{Index: index, Nominal: b.test.Plan.Points[index], Direction: d, Run: run, Repeat: repeat},
		Reference: exact(ref), Indicated: exact(indicated),
	})
}

func (b *bench) evaluate() *Result {
	b.t.Helper()
	r, err := Evaluate(b.test)
	if err != nil {
		b.t.Fatal(err)
	}
	return r
}
