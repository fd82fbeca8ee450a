package page

import (
	"encoding/json"
	"math"
	"net/http"

	"tautramp/cmd/tautramp/visit"
)

// trail is the way that setting and band stress took, thinned to what a screen
// can show, for a browser that comes late or comes back.
type trail struct {
	step   float64 // of the setting, between two points
	Cycles []way   `json:"cycles"`
	points int
}

// way is one cycle's points: setting and band stress, SI.
type way struct {
	Cycle    int         `json:"cycle"`
	Exercise bool        `json:"exercise"`
	Points   [][2]number `json:"points"`
}

const (
	trailStep = 0.003 // of the limit
	trailMost = 12000 // points: a visit without an end
)

func newTrail(limit number) trail {
	return trail{step: trailStep * float64(limit), Cycles: []way{}}
}

func (t *trail) add(s visit.Status) {
	if math.IsNaN(s.SettingSI) || math.IsNaN(s.StressPa) || t.points >= trailMost || s.Done {
		return
	}
	n := len(t.Cycles)
	if n == 0 || t.Cycles[n-1].Cycle != s.Cycle {
		t.Cycles = append(t.Cycles, way{Cycle: s.Cycle, Exercise: s.Exercise})
		n++
	}
	w := &t.Cycles[n-1]
	if k := len(w.Points); k > 0 && math.Abs(float64(w.Points[k-1][0])-s.SettingSI) < t.step {
		return
	}
	w.Points = append(w.Points, [2]number{number(s.SettingSI), number(s.StressPa)})
	t.points++
}

func (s *Server) trail(w http.ResponseWriter, _ *http.Request) {
	s.desk.mu.Lock()
	text, err := json.Marshal(s.desk.trail)
	s.desk.mu.Unlock()
	answer(w, text, err)
}
