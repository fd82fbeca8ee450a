package page

import (
	"bytes"
	"crypto/sha256"
	"encoding/base64"
	"encoding/json"
	"errors"
	"io"
	"net/http"
	"regexp"
	"strings"

	"tautramp/acquire/mill"
)

// paper hands out one paper of one recording: figures, sheet or plot.
func (s *Server) paper(w http.ResponseWriter, r *http.Request) {
	p, ok := s.desk.find(r.PathValue("id"))
	if !ok {
		http.NotFound(w, r)
		return
	}
	system, err := mill.ParseSystem(r.FormValue("units"))
	if err != nil {
		system = s.deps.System
	}
	var b bytes.Buffer
	switch r.PathValue("paper") {
	case "figures":
		s.hand(w, &b, "application/json", p.Figures)
	case "sheet":
		s.hand(w, &b, "text/html; charset=utf-8", inSystem(p.Sheet, system))
	case "card":
		s.card(w, r, p, system)
	case "plot":
		s.hand(w, &b, "image/svg+xml", inSystem(p.Plot, system))
	default:
		http.NotFound(w, r)
	}
}

// card hands out the card of a recording: after one fresh approach, and with the
// rig off the band.
func (s *Server) card(w http.ResponseWriter, r *http.Request, p filed, system mill.System) {
	proof, ok := s.desk.find(r.FormValue("proof"))
	switch {
	case s.deps.Card == nil:
		http.NotFound(w, r)
	case !ok || proof.kind != Verify || proof.of != p.Seal:
		http.Error(w, "no card yet: check the number once, with a fresh approach", http.StatusConflict)
	case !proof.RigOff:
		http.Error(w, "no card yet: nobody has confirmed that the rig is off the band", http.StatusConflict)
	default:
		wish := CardWish{From: r.FormValue("from"), Hold: r.FormValue("hold"), Bands: r.Form["band"], SameWheel: r.FormValue("same") == "yes", Proof: proof.Papers}
		var b bytes.Buffer
		s.hand(w, &b, "text/html; charset=utf-8", func(w io.Writer) error { return s.deps.Card(w, p.Papers, wish, system) })
	}
}

func inSystem(write func(io.Writer, mill.System) error, s mill.System) func(io.Writer) error {
	if write == nil {
		return nil
	}
	return func(w io.Writer) error { return write(w, s) }
}

// hand makes a paper and sends it whole, or the reason why there is none.
func (s *Server) hand(w http.ResponseWriter, b *bytes.Buffer, kind string, write func(io.Writer) error) {
	if write == nil {
		http.Error(w, "there is no such paper of this recording", http.StatusNotFound)
		return
	}
	if err := write(b); err != nil {
		http.Error(w, err.Error(), http.StatusConflict)
		return
	}
	w.Header().Set("Content-Type", kind)
	w.Header().Set("Content-Security-Policy", paperPolicy(b.String()))
	_, _ = w.Write(b.Bytes()) // the browser went away: nobody is left to tell
}

// paperPolicy lets a paper have the style that stands in it, by its hash, with
// the attributes of its drawings, and
// nothing that runs or comes from elsewhere.
func paperPolicy(html string) string {
	styles := ""
	for _, m := range regexp.MustCompile(`(?s)<style>(.*?)</style>`).FindAllStringSubmatch(html, -1) {
		sum := sha256.Sum256([]byte(m[1]))
		styles += " 'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
	}
	if styles == "" {
		styles = " 'none'"
	}
	return "default-src 'none'; style-src" + styles + "; style-src-attr 'unsafe-inline'; img-src data:; base-uri 'none'; form-action 'none'; frame-ancestors 'self'"
}

// open takes a recording of another day. What is uploaded is kept nowhere.
func (s *Server) open(w http.ResponseWriter, r *http.Request) {
	if s.deps.Open == nil || !strings.HasPrefix(r.Header.Get("Content-Type"), "application/octet-stream") {
		http.Error(w, "this takes a recording", http.StatusUnsupportedMediaType)
		return
	}
	p, err := s.deps.Open(http.MaxBytesReader(w, r.Body, mostRecording))
	if _, long := errors.AsType[*http.MaxBytesError](err); long {
		http.Error(w, "that file is too long for a recording", http.StatusRequestEntityTooLarge)
		return
	}
	if err != nil && p.Name == "" {
		http.Error(w, err.Error(), http.StatusUnprocessableEntity)
		return
	}
	p.Name = cleaned(p.Name)
	text, err := json.Marshal(map[string]string{"id": s.desk.file(p)})
	answer(w, text, err)
}
