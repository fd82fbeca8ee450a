package recording

import (
	"errors"
	"fmt"
)

// Bench is what the header of a bench test says beside: the plan, which two
// instruments, and the conditions. Texts that were not given are "".
type Bench struct {
	Plan      string // the plan's text, with its range
	Tested    string // name of the tested instrument in the profile
	Reference string // name of the reference in the profile
	Channel   string // board, from 1, and channel of the tested instrument, such as "2a"; "" where the serial number tells it
	Limit     string // name of the limit to judge by; "" takes the plan's
	Rule      string // name of the decision rule; "" takes the plan's
	StopAt    string // a quantity: nothing goes higher; "" takes the plan's range
	Place     string
	By        string // who tests
	Medium    string // "oil", "air"
	Height    string // a quantity: how far the tested instrument stands above the reference
	Note      string
	NextDue   string // YYYY-MM-DD, for the record
	Earlier   string // name of the file that this one continues, in the same folder
}

// The kinds of recording.
const (
	kindVisit = "visit"
	kindBench = "bench"
)

// benchField is one key of a bench test's header and its place.
type benchField struct {
	key string
	at  *string
}

// fields are the keys in the order in which they are written (SPEC 4.5).
func (b *Bench) fields() []benchField {
	return []benchField{
		{"plan", &b.Plan}, {"tested", &b.Tested}, {"reference", &b.Reference}, {"channel", &b.Channel},
		{"limit", &b.Limit}, {"rule", &b.Rule}, {"stop-at", &b.StopAt}, {"place", &b.Place}, {"by", &b.By},
		{"medium", &b.Medium}, {"height", &b.Height}, {"note", &b.Note}, {"next-due", &b.NextDue}, {"earlier", &b.Earlier},
	}
}

// appendTo writes the keys that are given.
func (b *Bench) appendTo(put func(key, value string)) {
	put("kind", kindBench)
	for _, f := range b.fields() {
		if *f.at != "" {
			put(f.key, *f.at)
		}
	}
}

func (b *Bench) set(key, value string) {
	for _, f := range b.fields() {
		if f.key == key {
			*f.at = value
		}
	}
}

func (b *Bench) check(h Header) error {
	switch {
	case b.Plan == "":
		return errors.New("it is of a bench test and holds no plan")
	case h.Presses.As != "":
		return fmt.Errorf("it is of a bench test, where a press is no %s", h.Presses.As)
	}
	return nil
}
