package estimate

import (
	"math"
	"slices"
	"sort"
)

// Feasible is the set of all lines y = A + B x that pass through every one of
// a series of intervals: a convex polygon in the plane of A and B. Where
// readings have no noise that their intervals can show, it holds the true line
// for certain, and no line inside it is likelier than another.
type Feasible struct {
	Centre   Line         // centroid, with the covariance of a uniform distribution over the polygon; DoF +Inf
	Vertices [][2]float64 // (A, B), the lower side by rising B, then the upper side back
}

// FeasibleLines is the set of lines through all intervals from lo to hi at x.
// It is exact, in n log n steps: a line passes when it runs above the upper
// hull of the lower ends and below the lower hull of the upper ends. ok is
// false when there is no such line, or only one. Errors as FitLine.
func FeasibleLines(x, lo, hi []float64) (f Feasible, ok bool, err error) {
	if err := checkIntervals(x, lo, hi); err != nil {
		return Feasible{}, false, err
	}
	f, ok = frameOf(x, lo, hi).feasible()
	return f, ok, nil
}

// At is the lowest and the highest value at x of all lines of the set.
func (f Feasible) At(x float64) (lo, hi float64) {
	return f.extent(func(v [2]float64) float64 { return v[0] + v[1]*x })
}

// Slopes is the lowest and the highest slope of the set.
func (f Feasible) Slopes() (lo, hi float64) {
	return f.extent(func(v [2]float64) float64 { return v[1] })
}

func (f Feasible) extent(of func(v [2]float64) float64) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, v := range f.Vertices {
		lo, hi = math.Min(lo, of(v)), math.Max(hi, of(v))
	}
	return lo, hi
}

// edge is the boundary A(B) that the hull's corners set on one side: the
// largest lo - B x, or the smallest hi - B x.
type edge struct {
	x, y   []float64 // corners, in the order in which rising B meets them
	breaks []float64 // B at which one corner hands over to the next
}

// hull is the upper hull for side +1, the lower hull for side -1. The order of
// points is by x.
func hull(x, y []float64, order []int, side float64) edge {
	var hx, hy []float64
	for _, i := range order {
		for len(hx) > 0 {
			n := len(hx) - 1
			if hx[n] == x[i] {
				if side*(y[i]-hy[n]) <= 0 {
					break
				}
			} else if n == 0 || side*((y[i]-hy[n])*(hx[n]-hx[n-1])-(hy[n]-hy[n-1])*(x[i]-hx[n])) < 0 {
				break
			}
			hx, hy = hx[:n], hy[:n]
		}
		if n := len(hx) - 1; n < 0 || hx[n] != x[i] {
			hx, hy = append(hx, x[i]), append(hy, y[i])
		}
	}
	if side > 0 { // its slopes fall with x
		slices.Reverse(hx)
		slices.Reverse(hy)
	}
	e := edge{x: hx, y: hy}
	for i := 1; i < len(hx); i++ {
		e.breaks = append(e.breaks, (hy[i]-hy[i-1])/(hx[i]-hx[i-1]))
	}
	return e
}

func (e edge) at(b float64) float64 {
	i := sort.SearchFloat64s(e.breaks, b)
	return e.y[i] - b*e.x[i]
}

// feasible works in the frame's own units and puts the result back.
func (f frame) feasible() (Feasible, bool) {
	order := make([]int, len(f.x))
	for i := range order {
		order[i] = i
	}
	sort.Slice(order, func(a, b int) bool { return f.x[order[a]] < f.x[order[b]] })
	below, above := hull(f.x, f.lo, order, +1), hull(f.x, f.hi, order, -1)
	slopes, ok := slopesBetween(below, above)
	if !ok {
		return Feasible{}, false
	}
	var out Feasible
	for _, b := range slopes {
		out.Vertices = append(out.Vertices, f.coefficientsBack(below.at(b), b))
	}
	for _, b := range slices.Backward(slopes) {
		out.Vertices = append(out.Vertices, f.coefficientsBack(above.at(b), b))
	}
	centre, ok := centroid(below, above, slopes)
	if !ok {
		return Feasible{}, false
	}
	out.Centre = f.lineBack(centre)
	out.Centre.N, out.Centre.DoF = len(f.x), math.Inf(1)
	return out, true
}

// slopesBetween is every B at which the polygon has a corner, from its lowest
// to its highest.
func slopesBetween(below, above edge) (slopes []float64, ok bool) {
	breaks := slices.Concat(below.breaks, above.breaks)
	slices.Sort(breaks)
	width := func(b float64) float64 { return above.at(b) - below.at(b) } // concave in b
	first, last := -1, -1
	for i, b := range breaks {
		if width(b) > 0 {
			if first < 0 {
				first = i
			}
			last = i
		}
	}
	if first < 0 {
		return nil, false
	}
	// Beyond the outermost corner the width falls on a straight line to nothing.
	ends := func(at, next float64) float64 {
		w, v := width(at), width(next)
		return at + (next-at)*w/(w-v)
	}
	lowest, highest := breaks[first]-1, breaks[last]+1
	if first > 0 {
		lowest = breaks[first-1]
	}
	if last+1 < len(breaks) {
		highest = breaks[last+1]
	}
	slopes = append(slopes, ends(breaks[first], lowest))
	slopes = append(slopes, breaks[first:last+1]...)
	return append(slopes, ends(breaks[last], highest)), true
}

// centroid is the mean and covariance of a uniform distribution between the
// edges. Every integrand is a cubic in B between two corners, for which
// Simpson's rule is exact.
func centroid(below, above edge, slopes []float64) (Line, bool) {
	var area, a, b, aa, ab, bb float64
	midA := (below.at(slopes[0]) + above.at(slopes[0])) / 2
	midB := slopes[0]
	add := func(at, weight float64) {
		lo, hi, u := below.at(at)-midA, above.at(at)-midA, at-midB
		area += weight * (hi - lo)
		b += weight * u * (hi - lo)
		bb += weight * u * u * (hi - lo)
		a += weight * (hi*hi - lo*lo) / 2
		ab += weight * u * (hi*hi - lo*lo) / 2
		aa += weight * (hi*hi*hi - lo*lo*lo) / 3
	}
	for i := 1; i < len(slopes); i++ {
		from, to := slopes[i-1], slopes[i]
		add(from, (to-from)/6)
		add((from+to)/2, 4*(to-from)/6)
		add(to, (to-from)/6)
	}
	if !(area > 0) {
		return Line{}, false
	}
	a, b = a/area, b/area
	return Line{
		A: midA + a, B: midB + b,
		VarA: math.Max(0, aa/area-a*a), VarB: math.Max(0, bb/area-b*b), CovAB: ab/area - a*b,
	}, true
}
