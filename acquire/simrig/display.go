package simrig

import "math"

// display cuts a value to whole counts. The places at which it steps may stand
// off from where they should, each by its own amount that stays, and it may
// step back later than it stepped on.
type display struct {
	truncates bool
	scatter   float64 // standard deviation of the places, counts
	back      float64 // counts
	seed      uint64
	index     int
	places    map[float64]float64
	shown     float64
	begun     bool
}

// show is the count shown of a value in counts.
func (d *display) show(counts float64) float64 {
	if d.scatter == 0 && d.back == 0 {
		if d.truncates {
			return math.Trunc(counts)
		}
		return math.Round(counts)
	}
	half := d.back / 2
	if !d.begun {
		d.shown, d.begun, half = math.Floor(counts), true, 0
	}
	if math.Abs(counts-d.shown) > 1000 {
		d.shown = math.Floor(counts)
	}
	for counts >= d.edge(d.shown+1)+half {
		d.shown++
	}
	for counts < d.edge(d.shown)-half {
		d.shown--
	}
	return d.shown
}

// edge is the value at which the display steps up to a count.
func (d *display) edge(count float64) float64 {
	at := count - 0.5
	if d.truncates {
		at = count
		if count <= 0 {
			at = count - 1
		}
	}
	if d.scatter == 0 {
		return at
	}
	off, known := d.places[count]
	if !known {
		if d.places == nil {
			d.places = map[float64]float64{}
		}
		// Within less than half a count, so that no step passes its neighbour.
		off = max(-0.45, min(0.45, d.scatter*newRand(d.seed^uint64(int64(count))*0x9e3779b97f4a7c15, streamScatter, d.index).NormFloat64()))
		d.places[count] = off
	}
	return at + off
}
