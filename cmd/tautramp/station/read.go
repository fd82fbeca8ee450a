package station

import (
	"fmt"
	"math"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

// Read follows a bench test through its recordings, the first one first, as it
// was followed live. Errors: ErrNotBench, ErrNotNext, ErrNoChannel, the plan's
// *mill.ProfileError.
func Read(recordings ...*recording.Recording) (*Bench, error) {
	if len(recordings) == 0 {
		return nil, ErrNotBench
	}
	b, err := New(recordings[0].Header)
	if err != nil {
		return nil, err
	}
	if recordings[0].Header.Continues != "" {
		return nil, fmt.Errorf("%w: it goes on from an earlier recording, which is not here", ErrNotNext)
	}
	for i, rec := range recordings {
		if i > 0 {
			if err := b.Continue(rec.Header, recordings[i-1].Seal); err != nil {
				return nil, err
			}
		}
		for _, e := range rec.Entries {
			b.Add(e)
		}
		if b.fault != nil {
			return nil, b.fault
		}
	}
	return b, nil
}

// readParts is the part of a division to which a pointer is brought to a mark by
// eye. Judgement.
const readParts = 5

// Test is what was captured by now, for gauge.Evaluate. seal is that of the
// last recording.
func (b *Bench) Test(seal string) gauge.Test {
	tested := instrument(b.first.Parsed, b.about.Tested)
	t := gauge.Test{
		Plan: b.plan, Points: b.points, Reversals: b.reversals(), ZeroBefore: b.before, ZeroAfter: b.after, Seal: seal,
		Instruments: gauge.Instruments{
			Tested: tested, Reference: instrument(b.first.Parsed, b.about.Reference),
			TestedCountSI: b.count(b.roles.tested), ReferenceCountSI: b.count(b.roles.reference),
		},
		Conditions: b.conditions(),
		Limit:      b.about.Limit, Rule: b.about.Rule, NextDue: b.about.NextDue,
	}
	if !b.plan.IndicatedStreams() {
		t.Instruments.TestedCountSI = tested.Division.SI / readParts
	}
	if b.first.Parsed != nil {
		t.Limits = b.first.Parsed.GaugeLimits
	}
	return t
}

func (b *Bench) conditions() gauge.Conditions {
	c := gauge.Conditions{
		Day: b.first.Started.Format(time.DateOnly), Place: b.about.Place, By: b.about.By, Medium: b.about.Medium,
		Note: b.about.Note, Program: b.first.Program, Simulated: b.stream.Simulated(), Temperature: b.meanCelsius(),
	}
	if q, err := mill.ParseQuantity(b.about.Height, mill.DimLength); err == nil {
		c.Height = mill.Length{Quantity: q}
	}
	return c
}

// meanCelsius is the mean temperature of the points; its random part is their
// scatter.
func (b *Bench) meanCelsius() estimate.Estimate {
	var all []float64
	system := 0.0
	for _, p := range b.points {
		if p.Temperature.Known() {
			all = append(all, p.Temperature.Value)
			system = math.Max(system, p.Temperature.System)
		}
	}
	if len(all) == 0 {
		return estimate.Unknown("nothing measured it")
	}
	m, sd := estimate.Mean(all)
	return estimate.Estimate{Value: m, Random: sd, System: system, DoF: math.Max(1, float64(len(all)-1)),
		Method: fmt.Sprintf("mean of %d points", len(all))}
}

// Lost is what went missing on the way, by device of the latest recording.
func (b *Bench) Lost() []pairing.Counters { return b.stream.Counters() }
