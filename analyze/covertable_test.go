package analyze

import (
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"testing"

	"tautramp/analyze/estimate"
)

var coverRigs = flag.Int("coverage", 0, "rigs of each case: judge the intervals anew and write testdata/coverage.txt")

// The seeds of the table; those of the reduced run, and those used while the
// analysis was made, are others.
const (
	tableSeeds   = 5_000_000
	reducedSeeds = 7_000_000
	seedsPerCase = 100_000
)

// covered is what became of the rigs of every case.
type covered struct {
	lock  sync.Mutex
	rigs  int // of each case
	cells map[cellKey]*tally
	none  map[int]int // rigs without four fitted ramps, by case
}

func newCovered() *covered { return &covered{cells: map[cellKey]*tally{}, none: map[int]int{}} }

func (v *covered) take(k cellKey, e estimate.Estimate, truth float64) {
	v.lock.Lock()
	defer v.lock.Unlock()
	if v.cells[k] == nil {
		v.cells[k] = &tally{}
	}
	v.cells[k].take(e, truth)
}

// judge adds one rig of a case.
func (v *covered) judge(kase int, seed uint64) {
	c := coverCases()[kase]
	p, err := coverProfile(c)
	if err == nil {
		err = coverRig(c, p, seed, func(ramps int, figure string, e estimate.Estimate, truth float64) {
			v.take(cellKey{kase, ramps, figure}, e, truth)
		})
	}
	if err != nil {
		v.lock.Lock()
		v.none[kase]++
		v.lock.Unlock()
	}
}

// more judges so many more rigs of each case, on all processors.
func (v *covered) more(rigs int, firstSeed uint64) {
	var wait sync.WaitGroup
	jobs := make(chan [2]int)
	for range runtime.GOMAXPROCS(0) {
		wait.Go(func() {
			for job := range jobs {
				v.judge(job[0], firstSeed+uint64(job[0]*seedsPerCase+job[1]))
			}
		})
	}
	for i := range rigs {
		for k := range coverCases() {
			jobs <- [2]int{k, v.rigs + i}
		}
	}
	close(jobs)
	wait.Wait()
	v.rigs += rigs
}

// wanted is the least and the most of a cell's share that is asked for, percent.
func wanted(ramps int) (least, most float64) {
	if ramps == 2 {
		return 93, 100
	}
	return 93.5, 96.5
}

// The table is written anew after every hundred rigs, so that a run that is cut short
// leaves what it has.
func TestCoverageTable(t *testing.T) {
	if *coverRigs == 0 {
		t.Skip("-coverage N writes the table")
	}
	const atOnce = 100
	for v := newCovered(); v.rigs < *coverRigs; {
		v.more(min(atOnce, *coverRigs-v.rigs), tableSeeds)
		if err := os.WriteFile(filepath.Join("testdata", "coverage.txt"), []byte(v.table()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func (v *covered) table() string {
	var b strings.Builder
	fmt.Fprintf(&b, `How often the 95 %% intervals hold the truth, in percent of simulated rigs that gave the figure.

%d rigs a case, seeds %d + %d x case + rig; go test ./analyze -run CoverageTable -coverage %d -timeout 0
Each rig draws its errors from its own budget, and each interval is held against its own truth: the curve
against the mean of the ramps to come, the next setting against the next one made, the true stress against
the band's on the next ramp. Columns: two, three and four ramps; then how many rigs gave the figure with four.
A star marks what lies outside 93.5 to 96.5 (below 93 with two ramps), chance included: two standard errors of
a cell are %.2f.

`, v.rigs, tableSeeds, seedsPerCase, v.rigs, 200*math.Sqrt(0.95*0.05/float64(v.rigs)))
	outside, all := 0, 0
	for k, c := range coverCases() {
		fmt.Fprintf(&b, "%s (%d of %d rigs with four ramps fitted)\n", c.name, v.rigs-v.none[k], v.rigs)
		for _, figure := range coverFigures() {
			stars, cells := v.row(&b, k, figure)
			outside, all = outside+stars, all+cells
		}
		b.WriteString("\n")
	}
	fmt.Fprintf(&b, "%d of %d cells carry a star.\n", outside, all)
	return b.String()
}

// row writes one figure of a case, and counts its stars and cells.
func (v *covered) row(b *strings.Builder, kase int, figure string) (stars, cells int) {
	fmt.Fprintf(b, "  %-24s", figure)
	last := 0
	for ramps := 2; ramps <= 4; ramps++ {
		y := v.cells[cellKey{kase, ramps, figure}]
		if y == nil || y.n == 0 {
			fmt.Fprint(b, "       - ")
			continue
		}
		share, star := 100*float64(y.hits)/float64(y.n), " "
		if least, most := wanted(ramps); share < least || share > most {
			star = "*"
			stars++
		}
		cells++
		last = y.n
		fmt.Fprintf(b, "  %6.2f%s", share, star)
	}
	fmt.Fprintf(b, "  %6d\n", last)
	return stars, cells
}

// A few rigs of every case, one figure over all cases together: bounds that 95 %
// would miss once in 10,000 times.
func TestCoverageReduced(t *testing.T) {
	if testing.Short() {
		t.Skip("the other coverage test has a short run")
	}
	v := newCovered()
	v.more(3, reducedSeeds)
	for _, figure := range coverFigures() {
		for ramps := 2; ramps <= 4; ramps++ {
			hits, n := 0, 0
			for k := range coverCases() {
				if y := v.cells[cellKey{k, ramps, figure}]; y != nil {
					hits, n = hits+y.hits, n+y.n
				}
			}
			if n < 18 || hits < leastHits(n) {
				t.Errorf("%s, %d ramps: %d of %d hold the truth, want %d; without a result: %v", figure, ramps, hits, n, leastHits(n), v.none)
			}
		}
	}
}
