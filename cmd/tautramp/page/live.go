package page

import (
	"net/http"
	"time"
)

const (
	beatEvery = time.Second     // so that the browser knows that the program lives
	lineWait  = 3 * time.Second // a viewer whose line takes nothing for so long is let go
)

// live is the stream of Server-Sent Events: what is new, and a beat each second.
func (s *Server) live(w http.ResponseWriter, r *http.Request) {
	v := s.hub.join()
	if v == nil {
		http.Error(w, "too many screens look on already", http.StatusServiceUnavailable)
		return
	}
	defer s.hub.leave(v)
	w.Header().Set("Content-Type", "text/event-stream")
	line := eventLine{w: w, control: http.NewResponseController(w)}
	beat := time.NewTicker(beatEvery)
	defer beat.Stop()
	for line.err == nil {
		select {
		case <-r.Context().Done():
			return
		case <-s.desk.over.Done():
			s.sendNew(&line, v) // how it ended
			return
		case <-beat.C:
			line.send("beat", []byte("{}"))
		case <-v.wake:
			s.sendNew(&line, v)
		}
	}
	s.hub.dropped.Add(1)
}

func (s *Server) sendNew(line *eventLine, v *viewer) {
	for t := range topics {
		if text := s.hub.next(v, t); text != nil {
			line.send(t.String(), text)
		}
	}
}

// eventLine writes events, each within lineWait. Texts hold no line ends: they
// are JSON.
type eventLine struct {
	w       http.ResponseWriter
	control *http.ResponseController
	buf     []byte
	err     error
}

func (l *eventLine) send(event string, text []byte) {
	if l.err != nil {
		return
	}
	l.buf = append(l.buf[:0], "event: "...)
	l.buf = append(l.buf, event...)
	l.buf = append(l.buf, "\ndata: "...)
	l.buf = append(l.buf, text...)
	l.buf = append(l.buf, "\n\n"...)
	// A server without deadlines, as in a test, is waited for.
	_ = l.control.SetWriteDeadline(time.Now().Add(lineWait))
	if _, l.err = l.w.Write(l.buf); l.err == nil {
		l.err = l.control.Flush()
	}
}
