package main

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/pflag"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
	"tautramp/analyze/gauge"
)

// rigBench is a simulated bench as asked for on the command line: its operator
// follows a plan, and makes the mistakes that are asked for.
type rigBench struct {
	plan, high        string
	tested, reference string
	faults            []string
	slips             []string
	alone             string
}

func (b *rigBench) add(fs *pflag.FlagSet) {
	fs.StringVar(&b.plan, "bench", "", "a bench in place of the mill: the plan that its operator follows, a name or a file")
	fs.StringVar(&b.high, "range", "", "bench: where the range of the tested instrument ends, such as \"1000 psi\"")
	fs.StringVar(&b.tested, "instrument", "", "bench: name of the tested instrument in mill.toml, for its serial number and range")
	fs.StringVar(&b.reference, "reference", "bench reference", "bench: name of the reference in mill.toml")
	fs.StringArrayVar(&b.faults, "gauge-fault", nil, "bench: what is wrong with the tested instrument: zero, bow, loop, stick, tap or creep and a measure, such as \"stick 2 psi\"; \"span 1.01\"")
	fs.StringSliceVar(&b.slips, "slips", nil, "bench: mistakes of the operator: "+join(simrig.Slips()))
	fs.StringVar(&b.alone, "alone", string(simrig.AloneHolds), "bench: what the operator does while nobody listens: holds, or \"lets down\"")
}

// serveBench runs a bench until the context ends.
func (o *rigOptions) serveBench(ctx context.Context, e env) error {
	if o.log != "" {
		return &usageError{"a bench writes no log: its points are judged while they are taken"}
	}
	boards, err := o.boardSpecs()
	if err != nil {
		return err
	}
	r, err := o.bench.build(o.mill, boards, o.seed)
	if err != nil {
		return err
	}
	return o.serve(ctx, r, e)
}

// build makes the bench.
func (b *rigBench) build(millFile string, boards []simrig.BoardSpec, seed uint64) (*simrig.Rig, error) {
	_, profile, err := readProfile(millFile)
	if err != nil {
		return nil, err
	}
	var tested mill.Instrument
	if b.tested != "" {
		if tested, err = namedInstrument(profile, "--instrument", b.tested); err != nil {
			return nil, err
		}
	}
	reference, err := namedInstrument(profile, "--reference", b.reference)
	if err != nil {
		return nil, err
	}
	span := benchOptions{high: b.high}
	low, high, err := span.span(tested)
	if err != nil {
		return nil, err
	}
	plan, err := planFor(b.plan, low, high)
	if err != nil {
		return nil, err
	}
	c := followedPlan(plan)
	c.Seed, c.Boards = seed, boards
	c.Tested.Serial, c.Reference.Serial = tested.Serial, reference.Serial
	if c.Gauge, err = gaugeFaults(b.faults, plan.Dim()); err != nil {
		return nil, err
	}
	for _, s := range b.slips {
		c.Slips = append(c.Slips, simrig.Slip(s))
	}
	c.Alone = simrig.Alone(b.alone)
	if !slices.Contains([]simrig.Alone{simrig.AloneHolds, simrig.AloneLetsDown}, c.Alone) {
		return nil, &usageError{fmt.Sprintf("--alone: %q is neither %s nor %s", b.alone, simrig.AloneHolds, simrig.AloneLetsDown)}
	}
	r, err := simrig.NewBench(c)
	if errors.Is(err, simrig.ErrConfig) {
		err = &usageError{err.Error()}
	}
	return r, err
}

// followedPlan is a bench whose operator does as the plan says.
func followedPlan(p gauge.Plan) simrig.BenchConfig {
	c := simrig.BenchConfig{
		Length: !p.ReferenceStreams(), BothRead: p.Kind == gauge.Transducer,
		LowSI: p.Low.SI, HighSI: p.High.SI, Down: p.Down, Repeats: p.Repeats, Runs: p.Runs, Exercise: p.Exercise,
		Way: simrig.BenchWay(p.Found), WarmUpS: p.WarmUpS, SettleS: p.SettleS, WindowS: p.WindowS, TopHoldS: p.TopHoldS,
	}
	for _, q := range p.Points {
		c.Points = append(c.Points, q.SI)
	}
	for _, s := range p.AllSeries() {
		c.Tapped = append(c.Tapped, s == gauge.Tapped)
	}
	return c
}

// gaugeFaults reads "stick 2 psi" and the like.
func gaugeFaults(texts []string, dim mill.Dim) (simrig.BenchGauge, error) {
	var g simrig.BenchGauge
	places := map[string]*float64{"zero": &g.ZeroSI, "bow": &g.BowSI, "loop": &g.LoopSI, "stick": &g.StickSI, "tap": &g.TapSI, "creep": &g.CreepSI}
	for _, text := range texts {
		name, measure, _ := strings.Cut(strings.TrimSpace(text), " ")
		if name == "span" {
			span, err := strconv.ParseFloat(strings.TrimSpace(measure), 64)
			if err != nil || !(span > 0.5 && span < 2) {
				return g, &usageError{fmt.Sprintf("--gauge-fault: %q: the span is a factor near 1, such as \"span 1.01\"", text)}
			}
			g.Span = span
			continue
		}
		to, ok := places[name]
		if !ok {
			return g, &usageError{fmt.Sprintf("--gauge-fault: %q is none of zero, span, bow, loop, stick, tap, creep", name)}
		}
		q, err := mill.ParseQuantity(measure, dim)
		if err != nil {
			return g, &usageError{"--gauge-fault: " + err.Error()}
		}
		*to = q.SI
	}
	return g, nil
}
