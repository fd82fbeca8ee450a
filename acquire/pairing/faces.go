package pairing

import (
	"sort"

	"tautramp/protocol"
)

// otherFace is the channel that measures the extension on the other face of the
// band, at the same place: on the same board, with the same count, on the same
// span. ok is false where there is none.
func (in *intake) otherFace(of source) (other source, ok bool) {
	a := in.spec(of)
	if a.Face == 0 {
		return source{}, false
	}
	for _, from := range in.candidates(protocol.Extension) {
		b := in.spec(from)
		if from.device == of.device && b.Face != 0 && b.Face != a.Face && b.Span == a.Span && protocol.LeastSI(*b) == protocol.LeastSI(*a) {
			return from, true
		}
	}
	return source{}, false
}

// meanFaces puts the mean of both faces in the place of the extension: curl of the
// band stretches one as much as it shortens the other. The other face is
// interpolated to the first one's instants; a reading without it is left out.
func (c *Channel) meanFaces(other Channel, hz float64) {
	maxGap := maxGapS(other.Spec, hz)
	o := other.Readings
	for i := range c.Readings {
		r := &c.Readings[i]
		if !r.Status.Ok() {
			continue
		}
		next := sort.Search(len(o), func(k int) bool { return o[k].T >= r.T })
		if len(o) == 0 {
			r.Status = protocol.Absent
			continue
		}
		v, ok := valueAt(r.T, o[max(next-1, 0)], o[min(next, len(o)-1)], maxGap)
		if !ok {
			r.Status = protocol.Absent
			continue
		}
		r.Value = (r.Value + v) / 2
	}
}
