package gauge

import "tautramp/acquire/mill"

// Kind is what a plan tests.
type Kind string

// The kinds of plan.
const (
	Dial       Kind = "dial"       // dial gauge: its pointer is brought to each mark, the reference is read
	Transducer Kind = "transducer" // digital transducer: both are read
	Indicator  Kind = "indicator"  // length indicator: the block or the micrometer's division is entered
	Rig        Kind = "rig"        // the whole measuring rig on a split bar, likewise
)

// How a transducer's points are found.
type Found string

// The ways. The zero value is ByPress.
const (
	ByPress   Found = "press"   // the operator presses at each
	ByPlateau Found = "plateau" // wherever the reference rests near a point
	BySweep   Found = "sweep"   // where a slow sweep passes each
)

// Plan is a bench test as planned. The share fields are of the range from Low
// to High.
type Plan struct {
	Name   string
	Kind   Kind
	Low    mill.Setting   // begin of the range; not given: zero
	High   mill.Setting   // its end; not given: the plan fits any range, see For
	Points []mill.Setting // rising
	Steps  int            // even steps from Low to High that Points was made from; 0: points were listed
	Skip   bool           // the evenly made points leave out Low, where a stop pin may hold the pointer
	Down   bool           // falling too: every point but the highest, which cannot be approached from above
	Series []Series       // in their order; empty: one without a name

	Repeats int // up and down, or up alone, within one mounting; at least 1
	Runs    int // mountings; at least 1

	Exercise  int     // cycles over the whole range first
	WarmUpS   float64 // before the first cycle
	SettleS   float64 // at each point, before the press counts
	TopHoldS  float64 // at the top, before the way down
	WindowS   float64 // over which a reading is averaged
	Steady    float64 // greatest share between highest and lowest reading of the window
	WrongSide float64 // share by which a point may be overshot before it is refused
	Found     Found

	Limit string // name of the limit to judge by; "" for none
	Rule  string // name of the decision rule; "" for none
}

// ReferenceStreams tells whether the box reads the reference; else its value
// is the nominal one.
func (p Plan) ReferenceStreams() bool { return p.Kind == Dial || p.Kind == Transducer }

// IndicatedStreams tells whether the box reads the tested instrument; else its
// reading is the mark.
func (p Plan) IndicatedStreams() bool { return p.Kind != Dial }

// Dim is the dimension of what the points are in; "" where none is given yet.
func (p Plan) Dim() mill.Dim {
	switch {
	case p.Kind == Indicator || p.Kind == Rig:
		return mill.DimLength
	case p.High.Given():
		return p.High.Unit.Dim
	case len(p.Points) > 0:
		return p.Points[0].Unit.Dim
	}
	return ""
}

// SpanSI is the whole range, SI; 0 where it is not known yet.
func (p Plan) SpanSI() float64 { return p.High.SI - p.Low.SI }

// AllSeries are the series in their order, at least one.
func (p Plan) AllSeries() []Series {
	if len(p.Series) == 0 {
		return []Series{""}
	}
	return p.Series
}

// Targets are all points in the order of the test: each run holds its repeats,
// each repeat its series, and each series rises and, where asked, falls.
func (p Plan) Targets() []Target {
	var all []Target
	for run := range p.Runs {
		for repeat := range p.Repeats {
			for _, s := range p.AllSeries() {
				all = append(all, p.leg(Target{Series: s, Run: run, Repeat: repeat})...)
			}
		}
	}
	return all
}

func (p Plan) leg(t Target) []Target {
	var all []Target
	add := func(i int, d Direction) {
		t.Index, t.Nominal, t.Direction = i, p.Points[i], d
		all = append(all, t)
	}
	for i := range p.Points {
		add(i, Up)
	}
	for i := len(p.Points) - 2; p.Down && i >= 0; i-- {
		add(i, Down)
	}
	return all
}
