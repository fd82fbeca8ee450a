package pairing

// point is one line of a device that carried a tick and was given a receive
// time.
type point struct {
	x float64 // ticks since the segment's first
	y float64 // s, receive time
}

// hullMax bounds a hull. Delays make hulls of a few dozen points; only a clock
// that speeds up all the time could fill it.
const hullMax = 512

// hull is the lower convex hull of points that come in the order of x: every
// straight line that stays under all of them touches it.
type hull []point

// add takes one point. A point earlier than the last is left out: the line
// under the others is then at worst less tight.
func (h *hull) add(p point) {
	s := *h
	if n := len(s); n > 0 && p.x <= s[n-1].x {
		if p.x < s[n-1].x || p.y >= s[n-1].y {
			return
		}
		s = s[:n-1]
	}
	for len(s) >= 2 && !turnsUp(s[len(s)-2], s[len(s)-1], p) {
		s = s[:len(s)-1]
	}
	s = append(s, p)
	if len(s) > hullMax {
		s = thin(s)
	}
	*h = s
}

// turnsUp reports whether b lies below the chord from a to c.
func turnsUp(a, b, c point) bool {
	return (b.y-a.y)*(c.x-a.x) < (c.y-a.y)*(b.x-a.x)
}

// thin leaves out, in place, the points that crowd: at most half of hullMax
// stay, spread over the whole span.
func thin(s hull) hull {
	last := s[len(s)-1]
	apart := (last.x - s[0].x) / (hullMax / 2)
	keep := s[:1]
	for _, p := range s[1 : len(s)-1] {
		if p.x >= keep[len(keep)-1].x+apart {
			keep = append(keep, p)
		}
	}
	return append(keep, last)
}

// under returns the line y = a + b x under all points that is closest to them
// at x: the edge of the hull there. It needs two points.
func (h hull) under(x float64) (a, b float64) {
	lo, hi := 0, len(h)-1
	for hi-lo > 1 {
		if mid := (lo + hi) / 2; h[mid].x <= x {
			lo = mid
		} else {
			hi = mid
		}
	}
	b = (h[hi].y - h[lo].y) / (h[hi].x - h[lo].x)
	return h[lo].y - b*h[lo].x, b
}

// height is the smallest distance of the points above y = a + b x; the nearest
// point of a set to a line under it is always one of its hull.
func (h hull) height(a, b float64) float64 {
	least := h[0].y - a - b*h[0].x
	for _, p := range h[1:] {
		least = min(least, p.y-a-b*p.x)
	}
	return least
}
