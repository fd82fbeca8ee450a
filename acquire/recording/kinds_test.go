package recording

import (
	"math"
	"reflect"
	"strings"
	"testing"
)

func benchHeader() Header {
	h := testHeader()
	h.Tensioner, h.Band, h.Plan = "", "", Plan{}
	h.Bench = &Bench{
		Plan: "name = \"ten marks\"\nkind = \"dial\"\n", Tested: "dial of T-1", Reference: "pressure transducer", Channel: "2a",
		Limit: "class 1.6", Rule: "guarded", StopAt: "1100 psi", Place: "filing room", By: "A. Fitter", Medium: "oil", Height: "0.2 m",
		Note: "as found", NextDue: "2027-03-14", Earlier: "first.ramp",
	}
	return h
}

func TestHeadersOfEveryKindComeBack(t *testing.T) {
	dial, step := testHeader(), testHeader()
	dial.Presses = Presses{As: PressDial, Marks: []string{"600 psi", "700 psi"}}
	step.Presses = Presses{As: PressStep, Marks: []string{"0 turns", "0.25 turns"}, Doubt: "0.02 turns"}
	for name, h := range map[string]Header{"visit": testHeader(), "bench": benchHeader(), "dial": dial, "step": step} {
		var f memory
		write(t, &f, h, nil)
		rec, err := Read(&f)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if !reflect.DeepEqual(rec.Header.Bench, h.Bench) || !reflect.DeepEqual(rec.Header.Presses, h.Presses) {
			t.Errorf("%s: %+v %+v", name, rec.Header.Bench, rec.Header.Presses)
		}
	}
}

func TestHeadersThatAreRefused(t *testing.T) {
	for name, change := range map[string]func(*Header){
		"a bench test without a plan":  func(h *Header) { h.Bench.Plan = "" },
		"a bench test with dial marks": func(h *Header) { h.Presses = Presses{As: PressDial, Marks: []string{"1 psi"}} },
		"presses of no kind":           func(h *Header) { h.Bench, h.Presses = nil, Presses{As: "knock", Marks: []string{"1 psi"}} },
		"presses without a list":       func(h *Header) { h.Bench, h.Presses = nil, Presses{As: PressDial} },
		"a mark with a comma":          func(h *Header) { h.Bench, h.Presses = nil, Presses{As: PressDial, Marks: []string{"1,000 psi"}} },
	} {
		h := benchHeader()
		change(&h)
		if _, err := NewWriter(&memory{}, h, 0); err == nil || !strings.Contains(err.Error(), "write a recording's header") {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestStepsAreReadInSI(t *testing.T) {
	const turn = 2 * math.Pi
	si, std, err := Presses{As: PressStep, Marks: []string{"0 turns", "1/4 turns", "0.75 turns"}}.Steps()
	if err != nil || len(si) != 3 || math.Abs(si[2]-0.75*turn) > 1e-12 || math.Abs(std-0.25*turn/20) > 1e-12 {
		t.Errorf("steps %v +- %v: %v", si, std, err)
	}
	if _, std, _ := (Presses{As: PressStep, Marks: []string{"0 turns", "1 turns"}, Doubt: "0.1 turns"}).Steps(); math.Abs(std-0.1*turn) > 1e-12 {
		t.Errorf("doubt %v", std)
	}
	if _, _, err := (Presses{As: PressStep, Marks: []string{"nothing"}}).Steps(); err == nil {
		t.Error("a step without a number is taken")
	}
}
