// Package page draws a visit in a browser and sends back what the operator
// presses: New gives an http.Handler with everything it needs inside. It shows
// visit.Status as it is, leads through the whole job, and hands out the papers
// that package report makes.
//
// Deliberately absent: files, ports and clocks (Deps brings them), any figure
// of the trade, and resources from outside. The wording and the look may
// change; nothing but its own assets may rely on the addresses that it serves.
package page

import (
	"context"
	"errors"
	"io"
	"io/fs"
	"net/http"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/station"
	"tautramp/cmd/tautramp/visit"
)

// Deps is the program around the page. Its functions are called from any
// goroutine; each may be nil, and the page then does without.
type Deps struct {
	Program string // name and version
	System  mill.System
	Access  Access

	Mill     func() ([]byte, error) // text of the folder's mill.toml; fs.ErrNotExist when there is none
	SaveMill func(text []byte) error
	Ports    func() ([]Port, error)

	Plans []Plan // of bench tests

	// Visit runs one order to its end and returns its papers. It ends soon
	// after ctx does. An error beside papers is shown with them.
	Visit func(ctx context.Context, o Order) (Papers, error)
	// OneVisit: the browser starts none, Run does.
	OneVisit bool
	// Card writes the card of a recording, or an error that says why there is
	// none.
	Card func(w io.Writer, of Papers, wish CardWish, s mill.System) error
	// Open makes the papers of a recording of another day.
	Open func(recording io.Reader) (Papers, error)
	// Bell sounds the computer that the program runs on.
	Bell func()
}

// Port is a place where a board may be plugged in.
type Port struct {
	Path  string `json:"path"`
	About string `json:"about"` // what the board calls itself; "" when not known
	Named bool   `json:"named"` // by whoever started the program: it is meant to be used
}

// Plan is a plan of a bench test that the program brings.
type Plan struct {
	Name  string `json:"name"`
	About string `json:"about"`
}

// CardWish is what a card shall say.
type CardWish struct {
	From      string // "below" or "above"
	Hold      string // "maintained" or "locked"; "" as mill.toml says
	Bands     []string
	SameWheel bool // confirmed: the same weight is moved with those bands, from where the wheel stood
	Proof     Papers
}

// Kind is what an order is for.
type Kind string

// The kinds of order.
const (
	Ramps  Kind = "ramps"  // a calibration: exercise, then ramps
	Face   Kind = "face"   // the same on the band's other face, going on from a recording
	Verify Kind = "verify" // one approach to the number on the card, going on from a recording
	Bench  Kind = "bench"  // a test of an instrument
)

// Order is one capture as asked for in the browser.
type Order struct {
	Kind      Kind
	Tensioner string
	Band      string
	Ports     []string
	Plan      recording.Plan
	Vent      bool // the setting's sensor will be vented for its zero: the page asks
	Presses   PressWish
	Before    Papers // of the recording that it goes on from; the zero value: none
	Bench     BenchWish

	Said      <-chan recording.Event          // what the operator presses and confirms
	Show      func(visit.Status)              // to be called with every status
	ShowBench func(station.Status, mill.Unit) // of a bench test, with the unit of its plan
}

// PressWish is what each press stands for, beside a plain mark: all as typed.
type PressWish struct {
	Dial  string `json:"dial"`  // marks of the mill's own gauge, one after the other: "600 psi, 700 psi"
	Step  string `json:"step"`  // no sensor reads the setting: how far from press to press, such as "1/4 turn"
	From  string `json:"from"`  // the first step; "" for zero
	Top   string `json:"top"`   // the highest, from where the steps lead down again
	Doubt string `json:"doubt"` // standard uncertainty of one step; "" for a twentieth of it
}

// BenchWish is a bench test as asked for.
type BenchWish struct {
	Plan      string `json:"plan"`
	Tested    string `json:"tested"`
	Reference string `json:"reference"`
	Range     string `json:"range"`
	Place     string `json:"place"`
	By        string `json:"by"`
	Anyway    bool   `json:"anyway"` // although the reference is too poor
}

// Name is a file name for the recording of an order: the tensioner's name, fit
// for a file, what it is for, and the time.
func (o Order) Name(tensioner string, at time.Time) string {
	what := ""
	if o.Kind != Ramps {
		what = "-" + string(o.Kind)
	}
	return tensioner + what + "-" + at.Format("20060102-150405") + ".ramp"
}

// Papers is what came of a recording. A nil function is a paper that there is
// not.
type Papers struct {
	Name    string // of the recording, without folders
	Seal    string
	Alarm   string // the gravest one raised; "" for none
	Verdict string // of a verification or a bench test, one word; "" where nothing was judged
	Says    string // what the verdict rests on
	RigOff  bool   // the recording holds that the rig is off the band
	Own     any    // the program's own, to know them again by
	Figures func(w io.Writer) error
	Sheet   func(w io.Writer, s mill.System) error // the report, one HTML page without scripts
	Plot    func(w io.Writer, s mill.System) error // the loop as SVG
}

// Server is the page. The zero value is of no use; see New.
type Server struct {
	deps Deps
	mux  *http.ServeMux
	gate gate
	hub  *hub
	desk *desk
}

// New makes the page. Visits that it starts end with ctx.
func New(ctx context.Context, deps Deps) *Server {
	s := &Server{deps: deps, mux: http.NewServeMux(), gate: gate{deps.Access}, hub: newHub()}
	s.desk = newDesk(ctx, deps, s.hub)
	s.routes()
	return s
}

func (s *Server) routes() {
	s.assets()
	s.mux.HandleFunc("GET /live", s.live)
	s.mux.HandleFunc("GET /trail", s.trail)
	s.mux.HandleFunc("POST /do", s.do)
	s.mux.HandleFunc("POST /start", s.start)
	s.mux.HandleFunc("GET /ports", s.ports)
	s.mux.HandleFunc("GET /mill", s.readMill)
	s.mux.HandleFunc("POST /mill", s.writeMill)
	s.mux.HandleFunc("POST /open", s.open)
	s.mux.HandleFunc("GET /papers/{id}/{paper}", s.paper)
}

// ServeHTTP answers one request, if the gate lets it in.
func (s *Server) ServeHTTP(w http.ResponseWriter, r *http.Request) {
	if s.gate.admits(w, r) {
		s.mux.ServeHTTP(w, r)
	}
}

// Run does an order as if it had been given in the browser, and waits for its
// end. ErrBusy while another one runs.
func (s *Server) Run(o Order) (Papers, error) {
	r, ctx, err := s.desk.begin(o)
	if err != nil {
		return Papers{}, err
	}
	return s.desk.finish(ctx, r)
}

// Wait returns when no visit runs any more.
func (s *Server) Wait() { s.desk.runs.Wait() }

// ErrBusy is an order while another one runs.
var ErrBusy = errors.New("a visit is running already")

// noMill tells that the folder has no mill.toml.
func noMill(err error) bool { return errors.Is(err, fs.ErrNotExist) }
