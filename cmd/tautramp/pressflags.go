package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/spf13/pflag"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
)

// stepFlags say that each press is the next step of the setting, as where a
// mill is set by turns, a torque wrench or a spring scale and no sensor reads
// it.
type stepFlags struct{ step, from, top, doubt string }

// pressFlags say what a press of a visit stands for.
type pressFlags struct {
	stepFlags
	dial string
}

func (p *pressFlags) add(fs *pflag.FlagSet) {
	fs.StringVar(&p.dial, "dial", "", "each press (foot switch, or m): the pointer of the mill's own gauge stands on the next of these marks, up and down, such as \"600 psi,700 psi,800 psi,700 psi,600 psi\"")
	fs.StringVar(&p.step, "step", "", "no sensor reads the setting: each press says that it has reached the next step, such as \"1/4 turn\" or \"10 lbf ft\"; hold still, press, go on")
	fs.StringVar(&p.from, "from", "", "with --step: where the first press stands (default: zero)")
	fs.StringVar(&p.top, "top", "", "with --step: the highest step, from where the steps lead down again")
	fs.StringVar(&p.doubt, "step-doubt", "", "with --step: standard uncertainty of one (default: a twentieth of a step)")
}

// presses is what the recording is to say of them.
func (p *pressFlags) presses(t mill.Tensioner, plan recording.Plan) (recording.Presses, error) {
	switch {
	case p.dial != "" && p.step != "":
		return recording.Presses{}, &usageError{"a press is either a mark of the --dial or a --step, not both"}
	case p.dial != "":
		return dialPresses(p.dial, t)
	case p.step != "":
		return steppedPresses(p.stepFlags, t, plan)
	case p.from != "" || p.top != "" || p.doubt != "":
		return recording.Presses{}, &usageError{"--from, --top and --step-doubt go with --step"}
	}
	return recording.Presses{}, nil
}

func dialPresses(list string, t mill.Tensioner) (recording.Presses, error) {
	p := recording.Presses{As: recording.PressDial}
	for _, text := range strings.Split(list, ",") {
		text = strings.TrimSpace(text)
		r, err := t.ParseDialReading(text)
		if err != nil {
			return p, &usageError{"--dial: " + err.Error()}
		}
		p.Marks = append(p.Marks, quantityText(r.Value, r.Unit))
	}
	return p, nil
}

// mostSteps bounds a series; more steps than this nobody takes.
const mostSteps = 200

// steppedPresses is one cycle of steps: from the first to the top, and down to
// the one before the first, from where it begins again. Exercise goes halfway
// up only, and so all cycles are listed where there is any.
func steppedPresses(f stepFlags, t mill.Tensioner, plan recording.Plan) (recording.Presses, error) {
	p := recording.Presses{As: recording.PressStep, Doubt: f.doubt}
	refuse := func(format string, args ...any) (recording.Presses, error) {
		return recording.Presses{}, &usageError{fmt.Sprintf(format, args...)}
	}
	if f.top == "" {
		return refuse("--step needs --top: how high do the steps go?")
	}
	q := map[string]mill.Quantity{}
	for flag, text := range map[string]string{"step": f.step, "top": f.top, "from": f.from, "step-doubt": f.doubt} {
		if text == "" {
			continue
		}
		var err error
		if q[flag], err = mill.ParseQuantity(text, t.SettingDim()); err != nil {
			return refuse("--%s: %v", flag, err)
		}
	}
	unit := q["step"].Unit
	from, step, top := unit.FromSI(q["from"].SI), unit.FromSI(q["step"].SI), unit.FromSI(q["top"].SI)
	n := math.Round((top - from) / step)
	switch {
	case !(step > 0) || !(top > from):
		return refuse("--step %s from %s to %s leads nowhere", f.step, orZero(f.from), f.top)
	case math.Abs(from+n*step-top) > 1e-6*step || n < 2 || n > mostSteps:
		return refuse("from %s to %s there are not 2 to %d whole steps of %s", orZero(f.from), f.top, mostSteps, f.step)
	case t.SettingLimit.Given() && q["top"].SI >= t.SettingLimit.SI:
		return refuse("--top %s reaches the limit of %s, %s", f.top, t.Name, t.SettingLimit.Entered)
	case f.doubt != "" && !(q["step-doubt"].SI > 0):
		return refuse("--step-doubt %s must be above zero", f.doubt)
	}
	stairs := func(top int) {
		for i := range 2 * top {
			p.Marks = append(p.Marks, quantityText(from+float64(min(i, 2*top-i))*step, unit.Name))
		}
	}
	for range plan.Exercise {
		stairs(max(1, int(n)/2))
	}
	for range rampsListed(plan) {
		stairs(int(n))
	}
	return p, nil
}

// rampsListed is how many ramps the presses are listed for: one, that begins
// again and again, unless exercise comes first.
func rampsListed(plan recording.Plan) int {
	const manyRamps = 20 // where nobody said when to end
	switch {
	case plan.Exercise == 0:
		return 1
	case plan.Ramps == 0:
		return manyRamps
	}
	return plan.Ramps
}

func orZero(text string) string {
	if text == "" {
		return "zero"
	}
	return text
}

// quantityText writes a number with its unit and without noughts behind.
func quantityText(v float64, unit string) string {
	return strconv.FormatFloat(math.Round(v*1e9)/1e9, 'f', -1, 64) + " " + unit
}
