package findings_test

import (
	"bytes"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"sort"
	"strings"
	"testing"

	"tautramp/analyze/findings"
)

// go test ./analyze/findings -run Confusion -table -rigs 400 -timeout 3h makes
// the committed table anew. -stream tuning uses the seeds for tuning and writes
// nothing; -only names one kind.
func TestMain(m *testing.M) {
	flag.Bool("table", false, "write testdata/confusion.txt anew")
	flag.Int("rigs", 0, "rigs a cause; 0: a reduced run")
	flag.String("stream", "table", "seeds: table or tuning")
	flag.String("only", "", "one kind of fault")
	flag.Bool("pilot", false, "find the usual doubts of the features anew, and print them")
	flag.Bool("loud", false, "print what went wrong")
	flag.Parse()
	os.Exit(m.Run())
}

func flagText(name string) string { return flag.Lookup(name).Value.String() }

// tally is what became of the rigs of one cause.
type tally struct {
	kind           string
	rigs           int
	passed         int // the cause is first, or in a group with no wrong cause named
	twice          int // rigs at twice the noticeable severity or more
	alone          int // of those, named first and alone
	wrongHigh      int // a wrong cause with high certainty
	firsts         map[string]int
	aboveWatch     int
	beyond, failed int // rigs that could not be planted or run
}

func newTally(kind string) *tally { return &tally{kind: kind, firsts: map[string]int{}} }

func has(f findings.Finding, k findings.Key) bool {
	return slices.ContainsFunc(f.Causes, func(c findings.Cause) bool { return c.Key == k })
}

func (t *tally) count(rep *findings.Report, cause findings.Key, times float64) (passed, wrong bool) {
	t.rigs++
	first := "none"
	inGroup, wrongNamed := false, false
	for i, f := range rep.Findings {
		ours := has(f, cause)
		if i == 0 {
			first = string(f.Key)
			passed = ours
		}
		inGroup = inGroup || ours && len(f.Causes) > 1
		if !ours && len(f.Causes) == 1 {
			wrongNamed = true
		}
		if !ours && f.Word == findings.High {
			wrong = true
		}
		if f.Level != findings.Watch {
			t.aboveWatch++
		}
	}
	passed = passed || inGroup && !wrongNamed
	t.firsts[first]++
	if passed {
		t.passed++
	}
	if wrong {
		t.wrongHigh++
	}
	if times >= 2 {
		t.twice++
		if len(rep.Findings) > 0 && len(rep.Findings[0].Causes) == 1 && has(rep.Findings[0], cause) {
			t.alone++
		}
	}
	return passed, wrong
}

func (u doubts) print() {
	for _, coarse := range []bool{false, true} {
		var keys []string
		for k := range u[coarse] {
			keys = append(keys, string(k))
		}
		sort.Strings(keys)
		for _, k := range keys {
			fmt.Printf("%v: %q: %.2g,\n", coarse, k, u[coarse][findings.FeatureKey(k)])
		}
	}
}

// pilot finds the usual doubt of each feature.
func pilot(t *testing.T, stream uint64, rigs int) doubts {
	t.Helper()
	all := map[bool]map[findings.FeatureKey][]float64{false: {}, true: {}}
	for seed := range rigs {
		s, err := draw(uint64(seed), stream^0xd0)
		if err != nil {
			t.Fatal(err)
		}
		rep, err := look(s.c)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range rep.Features {
			if f.Is.Known() {
				all[s.coarse()][f.Key] = append(all[s.coarse()][f.Key], f.Is.Std())
			}
		}
	}
	u := doubts{false: {}, true: {}}
	for coarse, features := range all {
		for k, v := range features {
			sort.Float64s(v)
			u[coarse][k] = v[len(v)/2]
		}
	}
	// What two spans and a bench leave open is in no healthy recording.
	for coarse := range u {
		u[coarse]["spans_differ"] = 0.02
		u[coarse]["gauge_sticks"], u[coarse]["gauge_curve"] = 0.0007, 0.0005
	}
	return u
}

func streamOf() uint64 {
	if flagText("stream") == "tuning" {
		return tuningStream
	}
	return tableStream
}

// severity is log-uniform from 1.5 to 6 times the noticeable one.
func severity(s *subject) float64 { return 1.5 * math.Exp(s.rng.Float64()*math.Log(4)) }

func runKind(t *testing.T, p planting, u doubts, rigs int, stream uint64) *tally {
	t.Helper()
	y := newTally(string(p.kind))
	seed := uint64(0)
	for y.rigs < rigs && seed < uint64(10*rigs+40) {
		seed++
		s, err := draw(seed, stream^hash(string(p.kind)))
		if err != nil {
			t.Fatal(err)
		}
		times := severity(s)
		ok, err := p.plant(s, u, times)
		if err != nil || !ok {
			y.beyond++
			continue
		}
		rep, err := look(s.c)
		if err != nil {
			y.failed++
			continue
		}
		passed, wrong := y.count(rep, p.cause, times)
		if flagText("loud") == "true" && (!passed || wrong) {
			fmt.Printf("%s seed %d x%.2f %s count %g:", p.kind, seed, times, s.c.Drive.Shape, s.countM)
			for _, f := range rep.Findings {
				fmt.Printf(" %s %.3f", f.Key, f.Certainty)
			}
			if !passed {
				for _, f := range rep.Features {
					if f.Key == p.feature {
						fmt.Printf(" | %s %.4g +- %.2g %s", f.Key, f.Is.Value, f.Is.Std(), f.Is.Why)
					}
				}
			}
			fmt.Println()
		}
	}
	return y
}

func hash(text string) uint64 {
	h := uint64(14695981039346656037)
	for _, b := range []byte(text) {
		h = (h ^ uint64(b)) * 1099511628211
	}
	return h
}

func share(n, of int) string {
	if of == 0 {
		return "-"
	}
	return fmt.Sprintf("%.1f %%", 100*float64(n)/float64(of))
}

func (t *tally) line() string {
	var firsts []string
	for k := range t.firsts {
		firsts = append(firsts, k)
	}
	sort.Slice(firsts, func(a, b int) bool {
		if t.firsts[firsts[a]] != t.firsts[firsts[b]] {
			return t.firsts[firsts[a]] > t.firsts[firsts[b]]
		}
		return firsts[a] < firsts[b]
	})
	for i, k := range firsts {
		firsts[i] = fmt.Sprintf("%s %d", k, t.firsts[k])
	}
	return fmt.Sprintf("%-30s %5d  %8s  %8s  %8s  %s", t.kind, t.rigs, share(t.passed, t.rigs), share(t.alone, t.twice), share(t.wrongHigh, t.rigs), strings.Join(firsts, ", "))
}

func TestConfusion(t *testing.T) {
	rigs := 0
	fmt.Sscan(flagText("rigs"), &rigs)
	reduced := rigs == 0
	if reduced {
		if testing.Short() {
			t.Skip("runs many simulated rigs")
		}
		rigs = 3
	}
	stream := streamOf()
	u := usualDoubts()
	if flagText("pilot") == "true" {
		u = pilot(t, tuningStream, 24)
		u.print()
	}
	var out bytes.Buffer
	fmt.Fprintf(&out, "%-30s %5s  %8s  %8s  %8s  %s\n", "planted", "rigs", "first", "alone", "wrong", "named first")
	pass, all := 0, 0
	for _, p := range plantings() {
		if only := flagText("only"); only != "" && only != string(p.kind) {
			continue
		}
		y := runKind(t, p, u, rigs, stream)
		pass, all = pass+y.passed, all+y.rigs
		fmt.Fprintln(&out, y.line())
		if !reduced {
			fmt.Println(y.line())
		}
	}
	if reduced && float64(pass) < 0.85*float64(all) {
		t.Errorf("%d of %d rigs named their cause first\n%s", pass, all, out.String())
	}
	if flagText("table") == "true" {
		fmt.Fprintf(&out, "\n%s\n%s\n%s", runPairs(t, u, rigs, stream), runHealthy(t, 5*rigs, stream), runCalibration(t, u, 12*rigs, stream))
		fmt.Print(out.String())
		if err := os.WriteFile(filepath.Join("testdata", "confusion.txt"), out.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}
