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

	"tautramp/acquire/mill"
	"tautramp/analyze/findings"
)

// go test ./analyze/findings -run Confusion -table -rigs 400 -timeout 3h makes
// the committed table anew. -stream tuning uses the seeds for tuning and writes
// nothing; -only names kinds.
func TestMain(m *testing.M) {
	flag.Bool("table", false, "write testdata/confusion.txt anew")
	flag.Int("rigs", 0, "rigs a cause, shared by the ways it is planted; 0: a reduced run")
	flag.String("stream", "table", "seeds: table or tuning")
	flag.String("only", "", "kinds of faults, with semicolons between")
	flag.Bool("pilot", false, "find the usual doubts of the features anew, and print them")
	flag.Bool("loud", false, "print what went wrong")
	flag.Parse()
	os.Exit(m.Run())
}

func flagText(name string) string { return flag.Lookup(name).Value.String() }

// tally is what became of the rigs of one cause.
type tally struct {
	kind           string
	grouped        bool // nothing in the recording tells the cause from others of its group
	rigs           int
	passed         int // the cause is first, or in a group with no wrong cause named
	twice          int // rigs at twice the noticeable severity or more, of those that tell it from others
	alone          int // of those, named first and alone
	wrongHigh      int // a wrong cause with high certainty
	firsts         map[string]int
	aboveWatch     int
	beyond, failed int // rigs on which so much is met in no mill, and that did not run
}

func newTally(kind string) *tally { return &tally{kind: kind, firsts: map[string]int{}} }

func has(f findings.Finding, k findings.Key) bool {
	return slices.ContainsFunc(f.Causes, func(c findings.Cause) bool { return c.Key == k })
}

func (t *tally) count(rep *findings.Report, cause findings.Key, apart bool) (passed, wrong bool) {
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
	if apart {
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
	y := newTally(p.title())
	y.grouped = p.grouped
	seed := uint64(0)
	for y.rigs < rigs && seed < uint64(40*rigs+40) {
		seed++
		s, err := drawSetBy(seed, stream^hash(p.title()), p.setBy())
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
		passed, wrong := y.count(rep, p.cause, times >= 2 && !p.grouped && !(p.fine && s.coarse()))
		if flagText("loud") == "true" && (!passed || wrong) {
			fmt.Printf("%s seed %d x%.2f %s count %g:", p.title(), seed, times, s.c.Drive.Shape, s.countM)
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

const lineFormat = "%-33v %5v %6v  %8v  %8v  %8v  %v"

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
	alone := share(t.alone, t.twice)
	if t.grouped {
		alone = "group"
	}
	return fmt.Sprintf(lineFormat, t.kind, t.rigs, t.beyond, share(t.passed, t.rigs), alone, share(t.wrongHigh, t.rigs), strings.Join(firsts, ", "))
}

func TestConfusion(t *testing.T) {
	rigs := 0
	fmt.Sscan(flagText("rigs"), &rigs)
	stream, u := streamOf(), usualDoubts()
	if rigs == 0 {
		reduced(t, u, stream)
		return
	}
	if flagText("pilot") == "true" {
		u = pilot(t, tuningStream, 24)
		u.print()
	}
	out := newPaper(t, flagText("table") == "true")
	out.say(groups())
	out.say(fmt.Sprintf(lineFormat, "planted", "rigs", "beyond", "first", "alone", "wrong", "named first"))
	all := newTally("all together")
	for _, p := range chosen() {
		y := runKind(t, p, u, ofCause(p.cause, rigs), stream)
		all.add(y)
		out.say(y.line())
	}
	all.firsts = nil
	out.say(all.line() + "\n")
	if out.file != "" {
		out.say(runPairs(t, u, rigs, stream))
		out.say(runHealthy(t, 5*rigs, stream))
		out.say(runCalibration(t, u, 35*rigs, stream))
		out.done()
	}
}

// ofCause is a line's share of the rigs of its cause: some are planted in several
// ways.
func ofCause(cause findings.Key, rigs int) int {
	lines := 0
	for _, p := range plantings() {
		if p.cause == cause {
			lines++
		}
	}
	return (rigs + lines - 1) / lines
}

// groups is the declared ones of each kind of tensioner.
func groups() string {
	var out strings.Builder
	for _, by := range []mill.SetBy{mill.SetByPressure, mill.SetByTorque, mill.SetByTurns, mill.SetBySpring} {
		fmt.Fprintf(&out, "groups, set by %s:", by)
		for _, g := range findings.Groups(by) {
			var keys []string
			for _, c := range g {
				keys = append(keys, string(c.Key))
			}
			fmt.Fprintf(&out, " (%s)", strings.Join(keys, " "))
		}
		fmt.Fprintln(&out)
	}
	return out.String()
}

// chosen is the plantings that -only names, or all.
func chosen() []planting {
	only := flagText("only")
	if only == "" {
		return plantings()
	}
	return slices.DeleteFunc(plantings(), func(p planting) bool { return !slices.Contains(strings.Split(only, ";"), p.title()) })
}

// reduced is one rig of each cause: a detector that broke would show.
func reduced(t *testing.T, u doubts, stream uint64) {
	if testing.Short() {
		t.Skip("runs many simulated rigs")
	}
	all := newTally("all together")
	var lines []string
	seen := map[findings.Key]bool{}
	for _, p := range plantings() {
		if seen[p.cause] {
			continue
		}
		seen[p.cause] = true
		y := runKind(t, p, u, 1, stream)
		all.add(y)
		lines = append(lines, y.line())
	}
	// At 95 % of so many, a share 4 standard deviations below it is met once in
	// 30,000 runs.
	n := float64(all.rigs)
	if least := 0.95*n - 4*math.Sqrt(n*0.95*0.05); float64(all.passed) < least {
		t.Errorf("%d of %d rigs named their cause first, fewer than %.0f\n%s", all.passed, all.rigs, least, strings.Join(lines, "\n"))
	}
	// And 1 % wrong ones.
	if most := 0.01*n + 4*math.Sqrt(n*0.01*0.99); float64(all.wrongHigh) > most {
		t.Errorf("%d of %d rigs had a wrong cause named with high certainty\n%s", all.wrongHigh, all.rigs, strings.Join(lines, "\n"))
	}
}

// add counts another's rigs too.
func (t *tally) add(o *tally) {
	t.rigs, t.beyond, t.passed, t.wrongHigh = t.rigs+o.rigs, t.beyond+o.beyond, t.passed+o.passed, t.wrongHigh+o.wrongHigh
	if !o.grouped {
		t.twice, t.alone = t.twice+o.twice, t.alone+o.alone
	}
}

// paper is what is printed and kept: after each line the file holds all so far,
// so that a run that is cut short is not lost.
type paper struct {
	t    *testing.T
	file string // "": not kept
	text bytes.Buffer
}

func newPaper(t *testing.T, kept bool) *paper {
	p := &paper{t: t}
	if kept {
		p.file = filepath.Join("testdata", "confusion.txt")
	}
	return p
}

func (p *paper) say(text string) {
	fmt.Println(text)
	fmt.Fprintln(&p.text, text)
	p.keep("not complete\n")
}

func (p *paper) done() { p.keep("") }

func (p *paper) keep(tail string) {
	if p.file == "" {
		return
	}
	if err := os.WriteFile(p.file, append(bytes.Clone(p.text.Bytes()), tail...), 0o644); err != nil {
		p.t.Fatal(err)
	}
}
