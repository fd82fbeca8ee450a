package gauge

import (
	"fmt"
	"strconv"
	"strings"

	"tautramp/acquire/mill"
)

// Where a plan does not say. Judgement: a Bourdon gauge settles in seconds and
// creeps at its top; the shares leave room for an ordinary hand pump.
const (
	defaultSettleS   = 5
	defaultWindowS   = 2
	defaultSteady    = 0.002
	defaultWrongSide = 0.002
)

// ParsePlan reads a plan. The error joins one *mill.ProfileError for each
// fault, in line order.
func ParsePlan(text []byte) (Plan, error) {
	d, err := mill.ReadDocument(text, "bench plan")
	if err != nil {
		return Plan{}, err
	}
	p := Plan{
		Name: d.NeedText("name", "write what the plan is called"),
		Kind: Kind(d.Word("kind", string(Dial), string(Transducer), string(Indicator), string(Rig))),
	}
	if !d.Has("kind") {
		d.Refuse("kind", "write dial, transducer, indicator or rig", "missing")
	}
	p.readPoints(d)
	p.readWays(d)
	p.readTimes(d)
	p.Limit, p.Rule = d.Text("limit"), d.Text("rule")
	if err := d.Close(); err != nil {
		return Plan{}, err
	}
	return p.placed()
}

func (p *Plan) readPoints(d *mill.Document) {
	dims := []mill.Dim{mill.DimPressure, mill.DimLength, mill.DimTorque, mill.DimAngle, mill.DimForce}
	if p.Kind == Indicator || p.Kind == Rig {
		dims = []mill.Dim{mill.DimLength}
	}
	p.Low = mill.Setting{Quantity: d.Signed("range_low", dims...)}
	p.High = mill.Setting{Quantity: d.Signed("range_high", dims...)}
	for _, q := range d.SignedList("points", dims...) {
		p.Points = append(p.Points, mill.Setting{Quantity: q})
	}
	p.Steps = d.Whole("steps", 1, 200)
	p.Skip = d.Word("first_point", "range low", "first step") == "first step"
	switch {
	case d.Has("steps") && d.Has("points"):
		d.Refuse("steps", "write either steps or points", "the points are listed already")
	case !d.Has("steps") && !d.Has("points"):
		d.Refuse("points", `list the points, such as points = ["100 psi", "200 psi"], or write steps = 10`, "missing")
	}
	p.checkPoints(d)
}

// checkPoints refuses points that do not rise or leave the range.
func (p *Plan) checkPoints(d *mill.Document) {
	for i, q := range p.Points {
		switch {
		case !q.Given():
			return // refused already
		case q.Unit.Dim != p.Points[0].Unit.Dim || p.High.Given() && q.Unit.Dim != p.High.Unit.Dim:
			d.Refuse("points", "one test has one quantity", "%s is of another kind than the rest", q)
			return
		case i > 0 && q.SI <= p.Points[i-1].SI:
			d.Refuse("points", "write them rising; the way down is made from them", "%s does not rise above %s", q, p.Points[i-1])
			return
		case q.SI < p.Low.SI || p.High.Given() && q.SI > p.High.SI:
			d.Refuse("points", "keep them within range_low and range_high", "%s lies outside the range", q)
			return
		}
	}
	if p.High.Given() && p.High.SI <= p.Low.SI {
		d.Refuse("range_high", "it must lie above range_low", "%s is not above %s", p.High, p.Low)
	}
	if len(p.Points) == 1 {
		d.Refuse("points", "write at least two", "one point shows no span")
	}
}

func (p *Plan) readWays(d *mill.Document) {
	p.Down = d.Word("directions", "up", "up and down") != "up"
	for _, w := range d.Words("series", string(Untapped), string(Tapped)) {
		p.Series = append(p.Series, Series(w))
	}
	switch {
	case len(p.Series) == 2 && p.Series[0] == p.Series[1] || len(p.Series) > 2:
		d.Refuse("series", "write each once; repeats asks for more", "a series stands twice")
	case len(p.Series) > 0 && p.Kind != Dial && p.Kind != "":
		d.Refuse("series", "take the line out", "tapping belongs to a dial, this plan is for a %s", p.Kind)
	}
	p.Repeats = max(1, d.Whole("repeats", 1, 20))
	p.Runs = max(1, d.Whole("mountings", 1, 10))
	p.Exercise = d.Whole("exercise_cycles", 0, 20)
	p.Found = Found(d.Word("find", string(ByPress), string(ByPlateau), string(BySweep)))
	if p.Found == "" {
		p.Found = ByPress
	}
	if p.Found != ByPress && p.Kind != Transducer {
		d.Refuse("find", "take the line out", "only where both instruments are read are points found without a press")
	}
}

func (p *Plan) readTimes(d *mill.Document) {
	orElse := func(key string, low, high, assumed float64) float64 {
		if v := d.Number(key, low, high); d.Has(key) {
			return v
		}
		return assumed
	}
	p.WarmUpS = d.Number("warm_up_seconds", 0, 7200)
	p.SettleS = orElse("settle_seconds", 0, 600, defaultSettleS)
	p.TopHoldS = d.Number("top_hold_seconds", 0, 3600)
	p.WindowS = orElse("window_seconds", 0.2, 60, defaultWindowS)
	p.Steady = orElse("steady_percent", 1e-4, 20, 100*defaultSteady) / 100
	p.WrongSide = orElse("wrong_side_percent", 1e-4, 20, 100*defaultWrongSide) / 100
}

// For is the plan for a range: evenly made points are made for it. The error
// is a *mill.ProfileError where listed points leave it.
func (p Plan) For(low, high mill.Setting) (Plan, error) {
	p.Low, p.High = low, high
	return p.placed()
}

// placed makes the even points; a plan without a range keeps none.
func (p Plan) placed() (Plan, error) {
	refuse := func(format string, args ...any) (Plan, error) {
		return Plan{}, &mill.ProfileError{Key: "range_high", Problem: fmt.Sprintf(format, args...), Hint: "write the range of the tested instrument"}
	}
	if !p.High.Given() {
		if n := len(p.Points); n > 0 && p.Steps == 0 {
			p.High = p.Points[n-1]
			return p, nil
		}
		return p, nil
	}
	switch {
	case p.High.SI <= p.Low.SI:
		return refuse("the range ends at %s and begins at %s", p.High, orZero(p.Low))
	case p.Low.Given() && p.Low.Unit.Dim != p.High.Unit.Dim:
		return refuse("the range runs from %s to %s", p.Low, p.High)
	case p.Dim() != "" && p.High.Unit.Dim != p.Dim():
		return refuse("%s is no %s", p.High, p.Dim())
	}
	if p.Steps == 0 {
		for _, q := range p.Points {
			if q.Unit.Dim != p.High.Unit.Dim || q.SI > p.High.SI || q.SI < p.Low.SI {
				return refuse("the plan's point %s lies outside %s to %s", q, orZero(p.Low), p.High)
			}
		}
		return p, nil
	}
	return p.even()
}

func orZero(q mill.Setting) string {
	if q.Given() {
		return q.Entered
	}
	return "0"
}

// even makes the points in the unit that the range's end was entered in, with
// as many digits as they need.
func (p Plan) even() (Plan, error) {
	u := p.High.Unit
	low, high := u.FromSI(p.Low.SI), u.FromSI(p.High.SI)
	first := 0
	if p.Skip {
		first = 1
	}
	p.Points = nil
	for i := first; i <= p.Steps; i++ {
		v := low + (high-low)*float64(i)/float64(p.Steps)
		q, err := mill.ParseQuantity(strconv.FormatFloat(v, 'g', 9, 64)+" "+u.Name, u.Dim)
		if err != nil {
			return Plan{}, fmt.Errorf("points of plan %q: %w", p.Name, err)
		}
		p.Points = append(p.Points, mill.Setting{Quantity: q})
	}
	return p, nil
}

// Encode is the plan as text that ParsePlan reads back to the same plan.
func (p Plan) Encode() []byte {
	var b strings.Builder
	text := func(key, v string) {
		if v != "" {
			fmt.Fprintf(&b, "%s = %s\n", key, strconv.Quote(v))
		}
	}
	number := func(key string, v float64) {
		fmt.Fprintf(&b, "%s = %s\n", key, strconv.FormatFloat(v, 'g', -1, 64))
	}
	text("name", p.Name)
	text("kind", string(p.Kind))
	text("range_low", p.Low.Entered)
	text("range_high", p.High.Entered)
	if p.Steps > 0 {
		number("steps", float64(p.Steps))
	} else {
		fmt.Fprintf(&b, "points = [%s]\n", quoted(p.Points, func(q mill.Setting) string { return q.Entered }))
	}
	if p.Skip {
		text("first_point", "first step")
	}
	text("directions", map[bool]string{false: "up", true: "up and down"}[p.Down])
	if len(p.Series) > 0 {
		fmt.Fprintf(&b, "series = [%s]\n", quoted(p.Series, func(s Series) string { return string(s) }))
	}
	number("repeats", float64(p.Repeats))
	number("mountings", float64(p.Runs))
	number("exercise_cycles", float64(p.Exercise))
	text("find", string(p.Found))
	number("warm_up_seconds", p.WarmUpS)
	number("settle_seconds", p.SettleS)
	number("top_hold_seconds", p.TopHoldS)
	number("window_seconds", p.WindowS)
	number("steady_percent", p.Steady*100)
	number("wrong_side_percent", p.WrongSide*100)
	text("limit", p.Limit)
	text("rule", p.Rule)
	return []byte(b.String())
}

func quoted[T any](list []T, text func(T) string) string {
	out := make([]string, len(list))
	for i, e := range list {
		out[i] = strconv.Quote(text(e))
	}
	return strings.Join(out, ", ")
}
