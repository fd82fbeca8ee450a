package page

import (
	"encoding/json"
	"errors"
	"net/http"
	"strings"

	"tautramp/acquire/mill"
)

// millView is the folder's profile for the forms.
type millView struct {
	Exists   bool        `json:"exists"`
	Tables   mill.Tables `json:"tables"`
	Faults   []millFault `json:"faults"`   // of a file that is refused
	Cautions []string    `json:"cautions"` // of one that is good
	Example  mill.Tables `json:"example"`
}

// millFault is one thing wrong in it.
type millFault struct {
	Path string `json:"path"` // such as "band.0.net_width"; "" for the whole
	Says string `json:"says"`
}

func (s *Server) readMill(w http.ResponseWriter, _ *http.Request) {
	v := millView{Tables: mill.Tables{}, Faults: []millFault{}, Cautions: []string{}}
	v.Example, _ = mill.ReadTables(mill.Example()) // built in, and tested
	var text []byte
	err := error(nil)
	if s.deps.Mill != nil {
		text, err = s.deps.Mill()
		v.Exists = err == nil
	}
	if v.Exists {
		if v.Tables, err = mill.ReadTables(text); err != nil {
			v.Tables, v.Faults = mill.Tables{}, append(v.Faults, millFault{Says: err.Error()})
		} else {
			v.judge()
		}
	} else if err != nil && !noMill(err) {
		answer(w, nil, err)
		return
	}
	body, err := json.Marshal(v)
	answer(w, body, err)
}

// judge fills in what is wrong with the tables, or doubtful, and returns their
// text.
func (v *millView) judge() []byte {
	text, paths := v.Tables.Text()
	p, err := mill.Parse(text)
	v.Faults, v.Cautions = faultsOf(err, paths), []string{}
	if err == nil {
		v.Cautions = append(v.Cautions, p.Cautions()...)
	}
	return text
}

// writeMill checks what the forms hold and, if it is good, keeps it. The answer
// says what is wrong and what is doubtful.
func (s *Server) writeMill(w http.ResponseWriter, r *http.Request) {
	var v millView
	if !decode(w, r, &v.Tables) {
		return
	}
	text := v.judge()
	if v.Exists = len(v.Faults) == 0; v.Exists {
		if s.deps.SaveMill == nil {
			http.Error(w, "the profile cannot be changed here", http.StatusConflict)
			return
		}
		if err := s.deps.SaveMill(text); err != nil {
			answer(w, nil, err)
			return
		}
	}
	body, err := json.Marshal(v)
	answer(w, body, err)
}

// faultsOf takes a joined error apart.
func faultsOf(err error, paths map[int]string) []millFault {
	out := []millFault{}
	joined, ok := err.(interface{ Unwrap() []error })
	list := []error{err}
	if ok {
		list = joined.Unwrap()
	}
	for _, e := range list {
		if e == nil {
			continue
		}
		says, path := e.Error(), ""
		if bad, ok := errors.AsType[*mill.ProfileError](e); ok {
			path, says = paths[bad.Line], bad.Problem
			if bad.Hint != "" {
				says += "; " + bad.Hint
			}
			if at := strings.LastIndexByte(bad.Key, '.'); bad.Problem == "missing" && at > 0 && path != "" {
				path += bad.Key[at:] // the line is that of the table
			}
		}
		out = append(out, millFault{path, says})
	}
	return out
}
