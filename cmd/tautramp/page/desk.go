package page

import (
	"context"
	"encoding/json"
	"strconv"
	"strings"
	"sync"
	"unicode"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/station"
	"tautramp/cmd/tautramp/visit"
)

// desk knows what is going on: the visit that runs, and the papers made so far.
type desk struct {
	over context.Context // ends with the program
	deps Deps
	hub  *hub

	runs   sync.WaitGroup
	mu     sync.Mutex
	run    *run
	fault  string  // why the last order failed
	papers []filed // by number, from 1
	trail  trail
}

// filed is papers that are held ready.
type filed struct {
	Papers
	kind Kind
	of   string // seal of the recording that it goes on from
}

// run is one visit that goes on.
type run struct {
	order Order
	site  siteView
	said  chan recording.Event
	stop  context.CancelFunc
}

// saidWaits is how many presses may wait for the capture.
const saidWaits = 64

// mostPapers is how many recordings the page holds ready; the oldest go first.
const mostPapers = 24

func newDesk(over context.Context, deps Deps, h *hub) *desk {
	d := &desk{over: over, deps: deps, hub: h}
	d.tell()
	return d
}

// begin starts an order and returns what ends it. ErrBusy while another runs.
func (d *desk) begin(o Order) (*run, context.Context, error) {
	site := siteOf(d.deps, o)
	d.mu.Lock()
	defer d.mu.Unlock()
	if d.run != nil {
		return nil, nil, ErrBusy
	}
	ctx, stop := context.WithCancel(d.over)
	r := &run{order: o, site: site, said: make(chan recording.Event, saidWaits), stop: stop}
	r.order.Said, r.order.Show, r.order.ShowBench = r.said, d.show, d.showBench
	d.run, d.fault, d.trail = r, "", newTrail(site.Limit)
	d.runs.Add(1)
	return r, ctx, nil
}

// finish runs what has begun to its end.
func (d *desk) finish(ctx context.Context, r *run) (Papers, error) {
	defer d.runs.Done()
	d.tell()
	papers, err := d.deps.Visit(ctx, r.order)
	r.stop()
	d.mu.Lock()
	d.run = nil
	if err != nil {
		d.fault = err.Error()
	}
	d.keep(filed{papers, r.order.Kind, r.order.Before.Seal})
	d.mu.Unlock()
	d.tell()
	return papers, err
}

// keep holds papers ready; those without a name are none. The desk is locked.
func (d *desk) keep(f filed) {
	if f.Name == "" {
		return
	}
	d.papers = append(d.papers, f)
	if n := len(d.papers) - mostPapers; n > 0 {
		clear(d.papers[:n]) // numbers stay what they were
	}
}

// say hands a press to the visit that runs, and reports whether there is one.
func (d *desk) say(e recording.Event) bool {
	d.mu.Lock()
	defer d.mu.Unlock()
	if d.run == nil {
		return false
	}
	select {
	case d.run.said <- e:
		return true
	default:
		return false
	}
}

// end ends the visit that runs.
func (d *desk) end() bool {
	d.mu.Lock()
	defer d.mu.Unlock()
	if d.run == nil {
		return false
	}
	d.run.stop()
	return true
}

// show takes a status: it is the visit's OnStatus.
func (d *desk) show(s visit.Status) {
	d.mu.Lock()
	d.trail.add(s)
	d.mu.Unlock()
	if text, err := json.Marshal(statusOf(s)); err == nil { // statusView cannot fail: it holds no maps and no floats
		d.hub.publish(nowTopic, text)
	}
}

// showBench takes a status of a bench test.
func (d *desk) showBench(s station.Status, unit mill.Unit) {
	if text, err := json.Marshal(benchOf(s, unit)); err == nil { // as above
		d.hub.publish(nowTopic, text)
	}
}

// tell publishes what is going on.
func (d *desk) tell() {
	d.mu.Lock()
	v := deskView{Program: d.deps.Program, Fault: d.fault, Units: unitTable(), System: d.deps.System, Plans: d.deps.Plans, OneVisit: d.deps.OneVisit, Papers: []papersView{}}
	if d.run != nil {
		v.Run = &d.run.site
	}
	for i, p := range d.papers {
		if p.Name != "" {
			v.Papers = append(v.Papers, papersView{ID: strconv.Itoa(i + 1), Name: p.Name, Kind: p.kind, Seal: p.Seal, Of: p.of, Alarm: p.Alarm,
				Verdict: p.Verdict, Says: p.Says, RigOff: p.RigOff})
		}
	}
	d.mu.Unlock()
	if text, err := json.Marshal(v); err == nil { // as above
		d.hub.publish(deskTopic, text)
	}
}

// find is the papers of a number, or false.
func (d *desk) find(id string) (filed, bool) {
	n, err := strconv.Atoi(id)
	d.mu.Lock()
	defer d.mu.Unlock()
	if err != nil || n < 1 || n > len(d.papers) || d.papers[n-1].Name == "" {
		return filed{}, false
	}
	return d.papers[n-1], true
}

// siteOf is what the profile says of where an order measures; what it does not
// say stays empty, and the capture will say why.
func siteOf(deps Deps, o Order) siteView {
	v := siteView{Kind: o.Kind, Tensioner: o.Tensioner, Band: o.Band, Role: mill.RolePressure, Limit: unknown(), Target: unknown(), Vent: o.Vent, Tested: o.Bench.Tested, Reference: o.Bench.Reference}
	switch {
	case o.Presses.Step != "":
		v.Press = "step"
	case o.Presses.Dial != "":
		v.Press = "dial"
	}
	if deps.Mill == nil {
		return v
	}
	text, err := deps.Mill()
	if err != nil {
		return v
	}
	p, err := mill.Parse(text)
	if err != nil {
		return v
	}
	v.Mill = p.Mill.Name
	if t, err := p.FindTensioner(o.Tensioner); err == nil {
		v.Tensioner, v.Role, v.Limit, v.Screw = t.Name, t.SettingRole(), number(t.LimitSI()), t.SetBy != mill.SetByPressure
		v.Shorter = t.FallsWithLoad()
	}
	if b, err := p.FindBand(o.Band); err == nil {
		v.Band = b.Name
		if b.Target.Given() {
			v.Target = number(b.Target.SI)
		}
	}
	return v
}

// cleaned is a text from a browser, fit for one line of a recording.
func cleaned(text string) string {
	const most = 200
	text = strings.Map(func(r rune) rune {
		if unicode.IsControl(r) {
			return ' '
		}
		return r
	}, strings.ToValidUTF8(text, "?"))
	if r := []rune(text); len(r) > most {
		text = string(r[:most])
	}
	return strings.TrimSpace(text)
}

// file holds the papers of an opened recording ready and returns their number.
func (d *desk) file(p Papers) string {
	d.mu.Lock()
	d.keep(filed{Papers: p, kind: "opened"})
	id := strconv.Itoa(len(d.papers))
	d.mu.Unlock()
	d.tell()
	return id
}
