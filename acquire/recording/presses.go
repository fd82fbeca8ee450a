package recording

import (
	"errors"
	"fmt"
	"strings"

	"tautramp/acquire/mill"
)

// PressAs is what a press of a visit stands for. The zero value is a plain mark.
type PressAs string

// What presses may stand for.
const (
	PressDial PressAs = "dial" // the pointer of the mill's own gauge stands on a mark
	PressStep PressAs = "step" // the setting has reached its next step
)

// Presses is what the presses of a visit stand for: each the next of the list,
// and after the last one the first again.
type Presses struct {
	As    PressAs
	Marks []string // quantities as declared, such as "600 psi"; without commas
	Doubt string   // steps: standard uncertainty of each, a quantity; "" means a twentieth of the smallest step
}

// assumedDoubt is how well a person stops at a step: by eye, a twentieth of it.
// Judgement.
const assumedDoubt = 1.0 / 20

const markSeparator = ", "

func (p Presses) text() string { return string(p.As) + " " + strings.Join(p.Marks, markSeparator) }

func parsePresses(text string) (Presses, error) {
	as, list, ok := strings.Cut(text, " ")
	if !ok {
		return Presses{}, errors.New("the header's presses have no list")
	}
	return Presses{As: PressAs(as), Marks: strings.Split(list, markSeparator)}, nil
}

func (p Presses) check() error {
	if p.As == "" && len(p.Marks) == 0 && p.Doubt == "" {
		return nil
	}
	if p.As != PressDial && p.As != PressStep {
		return fmt.Errorf("its presses are %q, not %q or %q", p.As, PressDial, PressStep)
	}
	if len(p.Marks) == 0 {
		return errors.New("its presses have no list")
	}
	for _, m := range p.Marks {
		if m == "" || strings.Contains(m, ",") {
			return fmt.Errorf("a press of it stands for %q", m)
		}
	}
	return nil
}

// Steps are the settings of stepped presses and the standard uncertainty of
// each, SI. The error is a *mill.QuantityError.
func (p Presses) Steps() (si []float64, std float64, err error) {
	for _, m := range p.Marks {
		q, err := mill.ParseQuantity(m)
		if err != nil {
			return nil, 0, err
		}
		si = append(si, q.SI)
	}
	if p.Doubt != "" {
		q, err := mill.ParseQuantity(p.Doubt)
		return si, q.SI, err
	}
	for i := 1; i < len(si); i++ {
		step := si[i] - si[i-1]
		if step < 0 {
			step = -step
		}
		if step > 0 && (std == 0 || step*assumedDoubt < std) {
			std = step * assumedDoubt
		}
	}
	return si, std, nil
}
