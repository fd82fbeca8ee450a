package page

import (
	"encoding/json"
	"errors"
	"net/http"
	"slices"

	"tautramp/acquire/recording"
)

const (
	mostJSON      = 256 << 10
	mostRecording = 128 << 20 // ten hours of two boards
)

// answer writes JSON, or what went wrong.
func answer(w http.ResponseWriter, text []byte, err error) {
	if err != nil {
		http.Error(w, err.Error(), http.StatusInternalServerError)
		return
	}
	w.Header().Set("Content-Type", "application/json")
	_, _ = w.Write(text) // the browser went away: nobody is left to tell
}

// decode reads a bounded JSON body; false when it has answered for itself.
func decode(w http.ResponseWriter, r *http.Request, to any) bool {
	if r.Header.Get("Content-Type") != "application/json" {
		http.Error(w, "this takes application/json", http.StatusUnsupportedMediaType)
		return false
	}
	d := json.NewDecoder(http.MaxBytesReader(w, r.Body, mostJSON))
	d.DisallowUnknownFields()
	err := d.Decode(to)
	if err == nil {
		return true
	}
	code := http.StatusBadRequest
	if _, long := errors.AsType[*http.MaxBytesError](err); long {
		code = http.StatusRequestEntityTooLarge
	}
	http.Error(w, "cannot read the request: "+err.Error(), code)
	return false
}

// deed is one thing that the operator does while a visit runs.
type deed struct {
	Deed string `json:"deed"`
	Text string `json:"text"`
}

// deeds are the words that a browser may send, and what they become in the
// recording.
func deeds() map[string]recording.EventKind {
	return map[string]recording.EventKind{
		"mark": recording.Mark, "undo": recording.Undo, "slack": recording.ZeroMark, "vent": recording.Vented,
		"turn": recording.LowerTurn, "abort": recording.Abort, "confirm": recording.Confirmed,
	}
}

// do takes a press. "end" ends the visit, "bell" sounds this computer.
func (s *Server) do(w http.ResponseWriter, r *http.Request) {
	var d deed
	if !decode(w, r, &d) {
		return
	}
	done := true
	switch kind, known := deeds()[d.Deed]; {
	case known:
		done = s.desk.say(recording.Event{Kind: kind, Text: cleaned(d.Text)})
	case d.Deed == "end":
		done = s.desk.end()
	case d.Deed == "bell":
		if s.deps.Bell != nil {
			s.deps.Bell()
		}
	default:
		http.Error(w, "no such deed", http.StatusBadRequest)
		return
	}
	if !done {
		http.Error(w, "no visit is running", http.StatusConflict)
		return
	}
	w.WriteHeader(http.StatusNoContent)
}

// wanted is an order as a browser sends it.
type wanted struct {
	Kind      Kind      `json:"kind"`
	Tensioner string    `json:"tensioner"`
	Band      string    `json:"band"`
	Ports     []string  `json:"ports"`
	Exercise  int       `json:"exercise"`
	Ramps     int       `json:"ramps"`
	Vent      bool      `json:"vent"`
	Continues string    `json:"continues"` // number of the papers that it goes on from
	Confirmed []string  `json:"confirmed"` // before the start
	Bench     BenchWish `json:"bench"`
	Presses   PressWish `json:"presses"`
}

// problem says what is wrong with it, or "".
func (o wanted) problem() string {
	switch {
	case !slices.Contains([]Kind{Ramps, Face, Verify, Bench}, o.Kind):
		return "an order is for ramps, face, verify or bench"
	case o.Kind == Verify && o.Continues == "":
		return "a number is checked of a recording that is here"
	case len(o.Ports) < 1 || len(o.Ports) > 2:
		return "choose one board, or two"
	case len(o.Ports) == 2 && o.Ports[0] == o.Ports[1]:
		return "the two boards are on one port"
	case o.Exercise < 0 || o.Exercise > 10 || o.Ramps < 0 || o.Ramps > 50:
		return "at most 10 exercise cycles and 50 ramps"
	case len(o.Confirmed) > saidWaits/2:
		return "too many confirmations"
	}
	return ""
}

// start begins a visit.
func (s *Server) start(w http.ResponseWriter, r *http.Request) {
	var o wanted
	if !decode(w, r, &o) {
		return
	}
	problem := o.problem()
	var before filed
	if problem == "" && o.Continues != "" {
		var ok bool
		if before, ok = s.desk.find(o.Continues); !ok {
			problem = "the recording that this goes on from is not here any more"
		}
	}
	if s.deps.Visit == nil || s.deps.OneVisit {
		problem = "nothing can be started here"
	}
	if problem != "" {
		http.Error(w, problem, http.StatusBadRequest)
		return
	}
	run, ctx, err := s.desk.begin(Order{
		Kind: o.Kind, Tensioner: o.Tensioner, Band: o.Band, Ports: o.Ports,
		Plan: recording.Plan{Exercise: o.Exercise, Ramps: o.Ramps}, Vent: o.Vent, Before: before.Papers, Bench: o.Bench, Presses: o.Presses,
	})
	if err != nil {
		http.Error(w, err.Error(), http.StatusConflict)
		return
	}
	for _, text := range o.Confirmed {
		run.said <- recording.Event{Kind: recording.Confirmed, Text: cleaned(text)} // half of the room at most
	}
	go s.desk.finish(ctx, run) // what went wrong is on the desk
	w.WriteHeader(http.StatusAccepted)
}

func (s *Server) ports(w http.ResponseWriter, _ *http.Request) {
	found := []Port{}
	if s.deps.Ports != nil {
		list, err := s.deps.Ports()
		if err != nil {
			answer(w, nil, err)
			return
		}
		found = append(found, list...)
	}
	text, err := json.Marshal(found)
	answer(w, text, err)
}
