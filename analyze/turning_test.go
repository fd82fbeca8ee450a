package analyze

import (
	"bufio"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"
)

func TestTurningPointsOfPublishedHistories(t *testing.T) {
	gages := pistonGages(t)
	for _, c := range []struct {
		name string
		x    []float64
		band float64
		want []int
	}{
		// ASTM E1049-85, 5.4.4, example: every value is a turning point.
		{"E1049", []float64{-2, 1, -3, 5, -1, 3, -4, 4, -2}, 1, []int{0, 1, 2, 3, 4, 5, 6, 7, 8}},
		// A vector of this project: seven smaller wiggles are passed over.
		{"wiggles", []float64{0, 0.4, 0.3, 1.1, 1, 1.6, 2.4, 2.3, 3.1, 3, 3.05, 2.9, 2.2, 2.3, 1.4, 1.5, 0.6, 0.2, 0.25, 0.1}, 0.5, []int{0, 8, 19}},
		// NIST piston gages, rows from 1 as found by eye in the data.
		{"gage 1", gages["1"], 1, rows(1, 10, 18)},
		{"gage 2", gages["2"], 1, rows(1, 6, 13, 20, 27, 39, 51)},
	} {
		if got := Turning(c.x, c.band); !slices.Equal(got, c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

func rows(oneBased ...int) []int {
	for i := range oneBased {
		oneBased[i]--
	}
	return oneBased
}

// pistonGages is the pressures by gage.
func pistonGages(t *testing.T) map[string][]float64 {
	t.Helper()
	f, err := os.Open("testdata/piston-gage-updown.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	out := map[string][]float64{}
	for s := bufio.NewScanner(f); s.Scan(); {
		fields := strings.Split(s.Text(), ",")
		if len(fields) != 4 {
			continue // a remark
		}
		if p, err := strconv.ParseFloat(fields[2], 64); err == nil {
			out[fields[1]] = append(out[fields[1]], p)
		}
	}
	return out
}

func TestTurningOfLittle(t *testing.T) {
	for _, c := range []struct {
		name string
		x    []float64
		want []int
	}{
		{"nothing", nil, nil},
		{"one value", []float64{5}, []int{0}},
		{"constant", []float64{5, 5, 5}, []int{0}},
		{"inside the dead band", []float64{0, 0.9, 0.1, 0.8}, []int{0}},
		{"falls first", []float64{5, 1, 4}, []int{0, 1, 2}},
		{"a step of just the dead band", []float64{0, 1, 0, 1}, []int{0}},
		{"equal extremes", []float64{0, 3, 3, 0, 0, 3}, []int{0, 1, 3, 5}},
		{"a missing value", []float64{0, 3, math.NaN(), 0}, []int{0, 1, 3}},
		{"missing at first", []float64{math.NaN(), 0, 3, 0}, []int{0, 2, 3}},
	} {
		if got := Turning(c.x, 1); !slices.Equal(got, c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

func TestTurnerConfirmsTopsAndBottomsInTurn(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	const band = 3.0
	x := make([]float64, 5000)
	for i := 1; i < len(x); i++ {
		x[i] = x[i-1] + r.NormFloat64()
	}
	turner := NewTurner(band)
	last, lastAt, n := NoTurn, -1, 0
	for i, v := range x {
		at, kind, ok := turner.Add(v)
		if !ok {
			continue
		}
		n++
		if kind == NoTurn || kind == last || at <= lastAt || at > i {
			t.Fatalf("at %d: kind %v of index %d after kind %v of index %d", i, kind, at, last, lastAt)
		}
		if back := math.Abs(v - x[at]); back <= band {
			t.Fatalf("at %d: confirmed after coming back by %v only", i, back)
		}
		last, lastAt = kind, at
	}
	if n < 50 {
		t.Fatalf("%d turning points in 5,000 steps", n)
	}
	points := Turning(x, band)
	for i := 1; i+1 < len(points); i++ {
		for _, v := range x[points[i-1] : points[i+1]+1] {
			top := x[points[i]] > x[points[i-1]]
			if top && v > x[points[i]] || !top && v < x[points[i]] {
				t.Fatalf("point %d is not the extreme between its neighbours", i)
			}
		}
	}
}
