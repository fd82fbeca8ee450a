package analyze

import (
	"flag"
	"fmt"
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

// coverage judges so many rigs of each case, on all processors. Rigs that gave no
// result are counted by case.
func coverage(t *testing.T, rigs int, firstSeed uint64) (cells map[cellKey]*tally, none map[int]int) {
	t.Helper()
	cells, none = map[cellKey]*tally{}, map[int]int{}
	var lock sync.Mutex
	var wait sync.WaitGroup
	jobs := make(chan [2]int)
	for range runtime.GOMAXPROCS(0) {
		wait.Add(1)
		go func() {
			defer wait.Done()
			for job := range jobs {
				c := coverCases()[job[0]]
				p, err := coverProfile(c)
				if err == nil {
					err = coverRig(c, p, firstSeed+uint64(job[0]*seedsPerCase+job[1]), func(ramps int, figure string, e estimate.Estimate, truth float64) {
						lock.Lock()
						defer lock.Unlock()
						k := cellKey{job[0], ramps, figure}
						if cells[k] == nil {
							cells[k] = &tally{}
						}
						cells[k].take(e, truth)
					})
				}
				if err != nil {
					lock.Lock()
					none[job[0]]++
					lock.Unlock()
				}
			}
		}()
	}
	for k := range coverCases() {
		for i := range rigs {
			jobs <- [2]int{k, i}
		}
	}
	close(jobs)
	wait.Wait()
	return cells, none
}

// wanted is the least and the most of a cell's share that is asked for, percent.
func wanted(ramps int) (least, most float64) {
	if ramps == 2 {
		return 93, 100
	}
	return 93.5, 96.5
}

func TestCoverageTable(t *testing.T) {
	if *coverRigs == 0 {
		t.Skip("-coverage N writes the table")
	}
	cells, none := coverage(t, *coverRigs, tableSeeds)
	var b strings.Builder
	fmt.Fprintf(&b, `How often the 95 %% intervals hold the truth, in percent of simulated rigs that gave the figure.

%d rigs a case, seeds %d + %d x case + rig; go test ./analyze -run CoverageTable -coverage %d -timeout 0
Each rig draws its errors from its own budget, and each interval is held against its own truth: the curve
against the mean of the ramps to come, the next setting against the next one made, the true stress against
the band's on the next ramp. Columns: two, three and four ramps; then how many rigs gave the figure with four.
A star marks what lies outside 93.5 to 96.5 (below 93 with two ramps), chance included.

`, *coverRigs, tableSeeds, seedsPerCase, *coverRigs)
	outside, all := 0, 0
	for k, c := range coverCases() {
		fmt.Fprintf(&b, "%s (%d of %d rigs with four ramps fitted)\n", c.name, *coverRigs-none[k], *coverRigs)
		for _, figure := range coverFigures() {
			fmt.Fprintf(&b, "  %-24s", figure)
			last := 0
			for ramps := 2; ramps <= 4; ramps++ {
				y := cells[cellKey{k, ramps, figure}]
				if y == nil || y.n == 0 {
					fmt.Fprint(&b, "       - ")
					continue
				}
				share, star := 100*float64(y.hits)/float64(y.n), " "
				if least, most := wanted(ramps); share < least || share > most {
					star = "*"
					outside++
				}
				all++
				last = y.n
				fmt.Fprintf(&b, "  %6.2f%s", share, star)
			}
			fmt.Fprintf(&b, "  %6d\n", last)
		}
		b.WriteString("\n")
	}
	fmt.Fprintf(&b, "%d of %d cells carry a star.\n", outside, all)
	if err := os.WriteFile(filepath.Join("testdata", "coverage.txt"), []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}

// A few rigs of every case, one figure over all cases together: bounds that 95 %
// would miss once in 10,000 times.
func TestCoverageReduced(t *testing.T) {
	if testing.Short() {
		t.Skip("the other coverage test has a short run")
	}
	cells, none := coverage(t, 3, reducedSeeds)
	for _, figure := range coverFigures() {
		for ramps := 2; ramps <= 4; ramps++ {
			hits, n := 0, 0
			for k := range coverCases() {
				if y := cells[cellKey{k, ramps, figure}]; y != nil {
					hits, n = hits+y.hits, n+y.n
				}
			}
			if n < 18 || hits < leastHits(n) {
				t.Errorf("%s, %d ramps: %d of %d hold the truth, want %d; without a result: %v", figure, ramps, hits, n, leastHits(n), none)
			}
		}
	}
}
