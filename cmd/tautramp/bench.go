package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"time"

	"github.com/spf13/pflag"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/analyze/report"
	"tautramp/cmd/tautramp/station"
)

// benchOptions is one bench test as asked for on the command line.
type benchOptions struct {
	resultFlags
	mill      string
	plan      string
	high, low string
	planTo    string
	ports     []string
	baud      int
	out       string
	continues string
	about     recording.Bench
	anyway    bool
	speed     float64
	patience  time.Duration
	said      <-chan recording.Event // from a page, beside the keys; may be nil
	show      func(station.Status)   // beside the screen; may be nil
}

func runBench(ctx context.Context, args []string, e env) error {
	var o benchOptions
	fs := flags("bench", "--plan PLAN --instrument NAME --reference NAME --port PORT",
		"Tests a gauge, a transducer, an indicator or the whole measuring rig against a\nreference, by foot switch: the screen says where to go, a short press marks the\npoint, a long one (1.5 s) takes the last one back. It ends by itself.\nPlans here: "+strings.Join(gauge.PlanNames(), ", ")+"; or a file ending in .toml.", e)
	var schema bool
	o.add(fs)
	fs.BoolVar(&schema, "schema", false, "print the JSON Schema of --json and stop")
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	switch {
	case schema:
		_, err := e.stdout.Write(report.BenchSchema())
		return err
	case o.planTo != "":
		return o.writePlan(e)
	case o.continues != "":
		return o.resume(ctx, e)
	}
	return o.begin(ctx, e)
}

func (o *benchOptions) add(fs *pflag.FlagSet) {
	fs.StringVar(&o.plan, "plan", "", "name of a plan, or a plan file ending in .toml")
	fs.StringVar(&o.high, "range", "", "where the range of the tested instrument ends, such as \"1000 psi\" (default: its range_high in mill.toml)")
	fs.StringVar(&o.low, "range-low", "", "where it begins (default: its range_low in mill.toml, or zero)")
	fs.StringVar(&o.planTo, "write-plan", "", "write the plan to this file, to be changed, and stop")
	fs.StringArrayVar(&o.ports, "port", nil, "serial port of a board, or tcp://host:port; give it twice for two boards")
	fs.IntVar(&o.baud, "baud", 115200, "serial speed")
	fs.StringVar(&o.out, "out", "", "recording to write, ending in .ramp (default: instrument and time)")
	fs.StringVar(&o.continues, "continue", "", "go on with the test of this recording, which was broken off")
	fs.StringVar(&o.mill, "mill", "mill.toml", "the mill's profile, with the instruments")
	fs.StringVar(&o.about.Tested, "instrument", "", "name of the tested instrument in mill.toml")
	fs.StringVar(&o.about.Reference, "reference", "", "name of the reference in mill.toml")
	fs.StringVar(&o.about.Channel, "tested-channel", "", "board and channel of the tested instrument, such as 2a, where no serial number tells")
	fs.StringVar(&o.about.Limit, "limit", "", "name of the limit to judge by (default: the plan's, or the instrument's own)")
	fs.StringVar(&o.about.Rule, "rule", "", "name of the decision rule (default: the plan's)")
	fs.StringVar(&o.about.StopAt, "stop-at", "", "shout when the reference gets here (default: 10 % of the range above its end)")
	fs.StringVar(&o.about.Place, "place", "", "where the test is made, for the report")
	fs.StringVar(&o.about.By, "by", "", "who makes it")
	fs.StringVar(&o.about.Medium, "medium", "", "what fills the instruments, such as oil")
	fs.StringVar(&o.about.Height, "height", "", "how far the tested instrument stands above the reference, such as \"0.2 m\"")
	fs.StringVar(&o.about.Note, "note", "", "any remark")
	fs.StringVar(&o.about.NextDue, "next-due", "", "day of the next test, YYYY-MM-DD")
	fs.BoolVar(&o.anyway, "anyway", false, "start although the reference is too poor for the limit")
	fs.DurationVar(&o.patience, "patience", 20*time.Second, "how long a port that went away may take to come back")
	fs.Float64Var(&o.speed, "speed", 1, "rehearsal only: the simulated rig's clock factor")
	o.resultFlags.add(fs)
}

// planText is the text of a plan that the program brings, or of a file.
func planText(name string) ([]byte, error) {
	if filepath.Ext(name) == ".toml" {
		text, err := os.ReadFile(name)
		if err != nil {
			return nil, fmt.Errorf("no plan: %w", err)
		}
		return text, nil
	}
	return gauge.PlanText(name)
}

// planFor is a plan made for a range.
func planFor(name string, low, high mill.Setting) (gauge.Plan, error) {
	if name == "" {
		return gauge.Plan{}, &usageError{"which plan? --plan takes " + strings.Join(gauge.PlanNames(), ", ") + ", or a file ending in .toml"}
	}
	text, err := planText(name)
	if err != nil {
		return gauge.Plan{}, err
	}
	p, err := gauge.ParsePlan(text)
	if err != nil {
		return p, &planError{name, err}
	}
	if high.Given() {
		if p, err = p.For(low, high); err != nil {
			return p, &planError{name, err}
		}
	}
	if len(p.Points) == 0 {
		return p, &planError{name, errors.New("it fits any range, and none is given: give --range, or range_high of the instrument in mill.toml")}
	}
	return p, nil
}

func (o *benchOptions) writePlan(e env) error {
	if o.plan == "" {
		return &usageError{"--write-plan needs --plan"}
	}
	text, err := planText(o.plan)
	if err != nil {
		return err
	}
	if filepath.Ext(o.planTo) != ".toml" {
		return &usageError{fmt.Sprintf("--write-plan %s: the name of a plan file ends in .toml", o.planTo)}
	}
	if err := refuseExisting(o.planTo); err != nil {
		return err
	}
	if err := os.WriteFile(o.planTo, text, 0o644); err != nil {
		return &fileError{err}
	}
	_, err = fmt.Fprintf(e.stdout, "%s is written: change it, then: tautramp bench --plan %s\n", o.planTo, o.planTo)
	return err
}

// begin starts a new test.
func (o *benchOptions) begin(ctx context.Context, e env) error {
	job, err := o.prepare(e)
	if err != nil {
		return err
	}
	return o.conduct(ctx, job, e)
}

// prepare settles what a new test is, and refuses it where it would prove
// nothing.
func (o *benchOptions) prepare(e env) (benchJob, error) {
	if err := o.check(); err != nil {
		return benchJob{}, err
	}
	header, plan, err := o.header(e)
	if err != nil {
		return benchJob{}, err
	}
	bench, err := station.New(header)
	if err != nil {
		return benchJob{}, err
	}
	return benchJob{header: header, bench: bench, plan: plan}, o.doubts(bench, e)
}

func (o *benchOptions) check() error {
	if len(o.ports) == 0 {
		return &usageError{"bench needs --port; tautramp ports lists what is plugged in"}
	}
	if !(o.speed > 0) || o.speed > 1000 || o.patience <= 0 {
		return &usageError{"--speed must be above 0 and at most 1000, --patience above 0"}
	}
	if o.about.Height != "" {
		if _, err := mill.ParseQuantity(o.about.Height, mill.DimLength); err != nil {
			return &usageError{"--height: " + err.Error()}
		}
	}
	if o.about.NextDue != "" {
		if _, err := time.Parse(time.DateOnly, o.about.NextDue); err != nil {
			return &usageError{fmt.Sprintf("--next-due: %q is no day as 2027-03-31", o.about.NextDue)}
		}
	}
	_, _, err := o.resultFlags.check()
	return err
}

// header fills in what the wire cannot say, and settles the file's name.
func (o *benchOptions) header(e env) (recording.Header, gauge.Plan, error) {
	var h recording.Header
	text, profile, err := readProfile(o.mill)
	if err != nil {
		return h, gauge.Plan{}, err
	}
	tested, err := namedInstrument(profile, "--instrument", o.about.Tested)
	if err != nil {
		return h, gauge.Plan{}, err
	}
	if _, err := namedInstrument(profile, "--reference", o.about.Reference); err != nil {
		return h, gauge.Plan{}, err
	}
	if o.about.Tested == o.about.Reference {
		return h, gauge.Plan{}, &usageError{"--instrument and --reference name the same one, " + tested.Name + ": nothing is tested against itself"}
	}
	low, high, err := o.span(tested)
	if err != nil {
		return h, gauge.Plan{}, err
	}
	plan, err := planFor(o.plan, low, high)
	if err != nil {
		return h, plan, err
	}
	if err := o.checkStopAt(plan); err != nil {
		return h, plan, err
	}
	now := e.wall()
	if o.out == "" {
		o.out = fileWord(tested.Name) + "-" + now.Format("20060102-150405") + ".ramp"
	}
	about := o.about
	about.Plan = string(plan.Encode())
	return recording.Header{
		Program: programVersion(), Started: now, Source: recording.Live, ClockFactor: o.speed,
		Devices: o.ports, Profile: text, Parsed: profile, Bench: &about,
	}, plan, nil
}

// checkStopAt refuses an alarm that the plan itself would raise.
func (o *benchOptions) checkStopAt(p gauge.Plan) error {
	if o.about.StopAt == "" {
		return nil
	}
	q, err := mill.ParseQuantity(o.about.StopAt, p.Dim())
	if err != nil {
		return &usageError{"--stop-at: " + err.Error()}
	}
	if top := p.Points[len(p.Points)-1]; q.SI <= top.SI {
		return &usageError{fmt.Sprintf("--stop-at %s: the plan goes up to %s; give a shorter --range, or a plan that stays below", o.about.StopAt, top.Entered)}
	}
	return nil
}

func namedInstrument(p *mill.Profile, flag, name string) (mill.Instrument, error) {
	var names []string
	for _, i := range p.Instruments {
		if i.Name == name {
			return i, nil
		}
		names = append(names, i.Name)
	}
	return mill.Instrument{}, fmt.Errorf("%s: %w: no instrument %q in the profile; known: %s", flag, mill.ErrUnknownName, name, strings.Join(names, ", "))
}

// span is the range that is tested: given, or the instrument's own.
func (o *benchOptions) span(tested mill.Instrument) (low, high mill.Setting, err error) {
	low, high = tested.Low, tested.High
	for _, f := range []struct {
		flag, text string
		to         *mill.Setting
	}{{"--range-low", o.low, &low}, {"--range", o.high, &high}} {
		if f.text == "" {
			continue
		}
		q, err := mill.ParseQuantity(f.text)
		if err != nil {
			return low, high, &usageError{f.flag + ": " + err.Error()}
		}
		*f.to = mill.Setting{Quantity: q}
	}
	return low, high, nil
}

// doubts says what speaks against the test before it starts.
func (o *benchOptions) doubts(bench *station.Bench, e env) error {
	found, err := gauge.BeforeStart(bench.Test(""), e.wall())
	if err != nil {
		return err
	}
	var stop []string
	for _, d := range found {
		if d.Stop {
			stop = append(stop, d.Text)
		}
		for i, line := range wrap(d.Text, 66) {
			head := "BEFORE YOU START  "
			if i > 0 {
				head = "                  "
			}
			if _, err := fmt.Fprintf(e.stderr, "%s%s\n", head, line); err != nil {
				return err
			}
		}
	}
	if len(stop) > 0 && !o.anyway {
		return &poorReferenceError{strings.Join(stop, "; ")}
	}
	return nil
}

func (o *benchOptions) devices() []acquire.Device {
	var devices []acquire.Device
	for _, name := range o.ports {
		devices = append(devices, acquire.Device{Name: name, Dial: port.Dialer(name, port.Options{Baud: o.baud})})
	}
	return devices
}
