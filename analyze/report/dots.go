package report

import (
	"tautramp/analyze"
)

// maxDots is the most points drawn of one recording, whatever its length.
const maxDots = 1600

// dot is one pair in display units. y is NaN where it is not known.
type dot struct {
	xy
	cycle  int
	phase  analyze.PhaseKind
	fitted bool
}

// dotsOf takes the pairs of a result, in time order, with their band stress.
func dotsOf(r *analyze.Result, u units) []dot {
	dots := make([]dot, len(r.Points))
	for i, p := range r.Points {
		dots[i] = dot{xy{u.setting.show(p.SettingSI), u.stress.show(p.Stress)}, p.Cycle, p.Phase, p.Fitted}
	}
	return dots
}

// stretchDots is dotsOf with the stretch as indicated.
func stretchDots(r *analyze.Result, u units) []dot {
	dots := dotsOf(r, u)
	for i, p := range r.Points {
		dots[i].y = u.extension.show(p.ExtensionM)
	}
	return dots
}

// drawable keeps the points that a picture can show.
func drawable(dots []dot) []dot {
	kept := make([]dot, 0, len(dots))
	for _, d := range dots {
		if finite(d.x) && finite(d.y) {
			kept = append(kept, d)
		}
	}
	return kept
}

// decimate keeps at most limit points of a series, in order: the lowest and the
// highest of each of limit/2 equal stretches, so that no spike is lost. The
// first and the last point stay, so that series still meet.
func decimate(points []xy, limit int) []xy {
	if len(points) <= limit || limit < 4 {
		return points
	}
	kept := []xy{points[0]}
	inner, stretches := points[1:len(points)-1], (limit-2)/2
	for i := range stretches {
		part := inner[i*len(inner)/stretches : (i+1)*len(inner)/stretches]
		lowest, highest := 0, 0
		for j, p := range part {
			if p.y < part[lowest].y {
				lowest = j
			}
			if p.y > part[highest].y {
				highest = j
			}
		}
		kept = append(kept, part[min(lowest, highest)])
		if lowest != highest {
			kept = append(kept, part[max(lowest, highest)])
		}
	}
	return append(kept, points[len(points)-1])
}

// roleOf is the role of a dot's cycle; outside any it is incomplete.
func roleOf(r *analyze.Result, cycle int) analyze.Role {
	if cycle < 0 || cycle >= len(r.Cycles) {
		return analyze.Incomplete
	}
	return r.Cycles[cycle].Role
}

// paths cuts the pairs of the cycles wanted into one path for each cycle. All
// pairs of the recording share maxDots by their number.
func paths(r *analyze.Result, dots []dot, want func(analyze.Role) bool) [][]xy {
	var out [][]xy
	for len(dots) > 0 {
		n := 1
		for n < len(dots) && dots[n].cycle == dots[0].cycle {
			n++
		}
		if want(roleOf(r, dots[0].cycle)) && n > 1 {
			path := make([]xy, n)
			for i := range path {
				path[i] = dots[i].xy
			}
			out = append(out, path)
		}
		dots = dots[n:]
	}
	total := 0
	for _, path := range out {
		total += len(path)
	}
	for i, path := range out {
		if total > maxDots {
			out[i] = decimate(path, maxDots*len(path)/total)
		}
	}
	return out
}
