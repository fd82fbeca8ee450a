package main

import (
	"bytes"
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

// computeBench reads the recordings of a bench test and works it out. It is the
// only way to a bench result in this program.
func computeBench(path string) (*gauge.Result, *recording.Recording, error) {
	chain, err := readChain(path)
	if err != nil {
		return nil, nil, err
	}
	bench, err := station.Read(chain...)
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", path, err)
	}
	last := chain[len(chain)-1]
	res, err := gauge.Evaluate(bench.Test(last.Seal))
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", path, err)
	}
	return res, last, nil
}

// analyzeBench computes the result of a bench test and puts it where the flags
// say.
func analyzeBench(path string, r resultFlags, system mill.System, e env) error {
	res, last, err := computeBench(path)
	if err != nil {
		return err
	}
	return r.writeBench(res, last, system, e)
}

// writeBench prints a result: the verdict, and the error at each point.
func (r *resultFlags) writeBench(res *gauge.Result, _ *recording.Recording, _ mill.System, e env) error {
	var b bytes.Buffer
	unit := res.Test.Plan.High.Unit
	fmt.Fprintf(&b, "%s against %s, %s\n", res.Test.Instruments.Tested.Name, res.Test.Instruments.Reference.Name, res.Test.Plan.Name)
	fmt.Fprintf(&b, "verdict: %s", res.Verdict.Outcome)
	if res.Limit.Name != "" {
		fmt.Fprintf(&b, ", by %s and %s", res.Limit.Name, res.Rule.Name)
	}
	fmt.Fprintln(&b)
	for _, c := range res.Curves {
		fmt.Fprintf(&b, "\n%s  error up, error down, %s\n", c.Series, unit.Name)
		for _, a := range c.At {
			fmt.Fprintf(&b, "%12s  %9.4g  %9.4g\n", a.Nominal.Entered, unit.FromSI(a.Up.Value), unit.FromSI(a.Down.Value))
		}
	}
	_, err := b.WriteTo(e.stdout)
	return err
}
