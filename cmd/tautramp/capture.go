package main

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"time"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/analyze/report"
	"tautramp/cmd/tautramp/page"
	"tautramp/cmd/tautramp/visit"
)

// syncEveryReal is how much of a visit a killed program may lose.
const syncEveryReal = 500 * time.Millisecond

// captureOptions is one capture as asked for on the command line.
type captureOptions struct {
	profileFlags
	resultFlags
	pressFlags
	serveFlags
	page      bool
	ports     []string
	baud      int
	out       string
	continues string
	plan      recording.Plan
	speed     float64
	patience  time.Duration
}

func runCapture(ctx context.Context, args []string, e env) error {
	var o captureOptions
	fs := flags("capture", "--port PORT [--port PORT]",
		"Records a visit: every line of the boards and everything you do, then computes\nthe result. Ramp slowly up, hold, slowly down, rest; it ends by itself.\nKeys, each followed by Enter: z = the band is slack now, m = mark, u = undo the mark.", e)
	fs.StringArrayVar(&o.ports, "port", nil, "serial port of a board, or tcp://host:port; give it twice for two boards")
	fs.IntVar(&o.baud, "baud", 115200, "serial speed")
	fs.StringVar(&o.out, "out", "", "recording to write, ending in .ramp (default: tensioner and time)")
	fs.StringVar(&o.continues, "continues", "", "an earlier recording of the same visit that this one goes on from")
	fs.IntVar(&o.plan.Exercise, "exercise", 1, "cycles first that are recorded and never fitted")
	fs.IntVar(&o.plan.Ramps, "ramps", 3, "cycles to fit; it ends when they are closed (0 = until Ctrl-C)")
	fs.DurationVar(&o.patience, "patience", 20*time.Second, "how long a port that went away may take to come back")
	fs.Float64Var(&o.speed, "speed", 1, "rehearsal only: the simulated rig's clock factor")
	fs.BoolVar(&o.page, "page", false, "show the visit in a browser too, as tautramp page does")
	o.serveFlags.add(fs)
	o.profileFlags.add(fs, "mill.toml", "the mill's profile")
	o.pressFlags.add(fs)
	o.resultFlags.add(fs)
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	return o.run(ctx, e)
}

func (o *captureOptions) run(ctx context.Context, e env) error {
	system, target, err := o.check()
	if err != nil {
		return err
	}
	s, err := o.load(e)
	if err != nil {
		return err
	}
	header, err := o.header(s, e)
	if err != nil {
		return err
	}
	if filepath.Ext(o.out) != ".ramp" {
		return &usageError{fmt.Sprintf("--out %s: the name of a recording ends in .ramp", o.out)}
	}
	if err := refuseExisting(o.out); err != nil {
		return err
	}
	if err := printCautions(e); err != nil {
		return err
	}
	if _, err := fmt.Fprintln(e.stderr, keyHelp); err != nil {
		return err
	}
	job := recordJob{header: header, path: o.out, devices: o.devices(), system: system, patience: o.patience}
	visitErr := o.recordAndShow(ctx, job, e)
	return finish(o.out, visitErr, o.resultFlags, system, target, e)
}

// recordAndShow records, and lets a page look on and press where one is wanted.
func (o *captureOptions) recordAndShow(ctx context.Context, job recordJob, e env) error {
	if !o.page {
		return record(ctx, job, e)
	}
	visitErr := errNotRun
	deps := func(access page.Access) page.Deps {
		return page.Deps{Program: programVersion(), System: job.system, Access: access, OneVisit: true,
			Mill: func() ([]byte, error) { return job.header.Profile, nil },
			Bell: func() { fmt.Fprint(e.stderr, "\a") }, // lost at worst
			Visit: func(ctx context.Context, order page.Order) (page.Papers, error) {
				job.said, job.show = order.Said, order.Show
				visitErr = record(ctx, job, e)
				return page.Papers{}, visitErr
			}}
	}
	quiet := e
	quiet.stdout = e.stderr // the result alone goes to stdout
	server, err := o.start(ctx, deps, quiet)
	if err != nil {
		return err
	}
	_, runErr := server.Run(page.Order{Kind: page.Ramps, Tensioner: job.header.Tensioner, Band: job.header.Band, Ports: o.ports, Plan: job.header.Plan})
	if err := server.close(); err != nil || visitErr == errNotRun {
		return errors.Join(visitErr, runErr, err)
	}
	return visitErr
}

// errNotRun stands until a visit has ended.
var errNotRun = errors.New("the visit was not run")

// finish computes the result of what was recorded. After an alarm it does so
// too, and what is said last is the alarm.
func finish(path string, visitErr error, r resultFlags, system mill.System, target mill.Pressure, e env) error {
	if visitErr != nil && !onlyAlarm(visitErr) {
		return visitErr
	}
	return errors.Join(analyzeFile(path, r, otherBand{}, system, target, true, e), visitErr)
}

// onlyAlarm is true where the visit itself went well but for an alarm.
func onlyAlarm(err error) bool {
	_, ok := err.(*alarmError)
	return ok
}

func (o *captureOptions) check() (mill.System, mill.Pressure, error) {
	if len(o.ports) == 0 {
		return "", mill.Pressure{}, &usageError{"capture needs --port; tautramp ports lists what is plugged in"}
	}
	for _, name := range o.ports {
		if file, isFile := strings.CutPrefix(name, replayPrefix); isFile {
			return "", mill.Pressure{}, &usageError{fmt.Sprintf("%s is no live port: tautramp import %s makes a recording of it", name, file)}
		}
	}
	if !(o.speed > 0) || o.speed > 1000 {
		return "", mill.Pressure{}, &usageError{"--speed must be above 0 and at most 1000"}
	}
	if o.plan.Exercise < 0 || o.plan.Ramps < 0 || o.patience <= 0 {
		return "", mill.Pressure{}, &usageError{"--exercise, --ramps and --patience cannot be negative"}
	}
	return o.resultFlags.check()
}

// header fills in what the wire cannot say, and settles the file's name.
func (o *captureOptions) header(s site, e env) (recording.Header, error) {
	presses, err := o.presses(s.tensioner, o.plan)
	if err != nil {
		return recording.Header{}, err
	}
	now := e.wall()
	if o.out == "" {
		o.out = fileWord(s.tensioner.Name) + "-" + now.Format("20060102-150405") + ".ramp"
	}
	h := recording.Header{
		Program: programVersion(), Started: now, Source: recording.Live, ClockFactor: o.speed,
		Devices: o.ports, Tensioner: s.tensioner.Name, Band: s.band.Name, Plan: o.plan, Presses: presses, Profile: s.text, Parsed: s.profile,
	}
	if o.continues == "" {
		return h, nil
	}
	before, err := recording.ReadFile(o.continues)
	if err != nil {
		return h, fmt.Errorf("--continues: %w", err)
	}
	h.Continues = before.Seal
	return h, nil
}

// fileWord makes a name fit for a file on every system.
func fileWord(name string) string {
	return strings.Map(func(r rune) rune {
		if r == '-' || r >= '0' && r <= '9' || r >= 'A' && r <= 'Z' || r >= 'a' && r <= 'z' {
			return r
		}
		return '_'
	}, name)
}

func (o *captureOptions) devices() []acquire.Device {
	var devices []acquire.Device
	for _, name := range o.ports {
		devices = append(devices, acquire.Device{Name: name, Dial: port.Dialer(name, port.Options{Baud: o.baud})})
	}
	return devices
}

func printCautions(e env) error { return printTexts("CAUTION  ", report.Cautions(), e) }

// wrap cuts text into lines of at most so many bytes, at spaces.
func wrap(text string, width int) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		if line != "" && len(line)+1+len(word) > width {
			lines, line = append(lines, line), ""
		}
		line = strings.TrimSpace(line + " " + word)
	}
	return append(lines, line)
}

// recordJob is what record needs, from capture or from the demo.
type recordJob struct {
	header  recording.Header
	path    string
	devices []acquire.Device
	system  mill.System
	clock   acquire.Clock // nil: a clock of the header's factor
	// patience is the real time that a lost port may take; 0 means acquire's.
	patience time.Duration
	aimSI    float64                // visit.Config.AimSI
	said     <-chan recording.Event // from a page, beside the keys; may be nil
	show     func(visit.Status)     // beside the screen; may be nil
}

// record runs the visit and closes the recording, whatever happens. An alarm
// is in the error that it returns, alone or beside what ended the visit.
func record(ctx context.Context, job recordJob, e env) error {
	if job.clock == nil {
		job.clock = e.clock(job.header.ClockFactor)
	}
	every := time.Duration(float64(syncEveryReal) * job.header.ClockFactor)
	out, err := recording.Create(job.path, job.header, every)
	if err != nil {
		return &fileError{err}
	}
	keys, stopKeys := operatorKeys(e, job.said)
	defer stopKeys()
	screen := newScreen(e, job.header, job.system)
	show := screen.draw
	if job.show != nil {
		show = func(s visit.Status) { job.show(s); screen.draw(s) }
	}
	summary, err := visit.Run(ctx, visit.Config{
		Acquire: acquire.Config{Devices: job.devices, Clock: job.clock, Out: out, Operator: keys,
			GiveUpAfter: time.Duration(float64(job.patience) * job.header.ClockFactor)},
		Header: job.header, Plan: job.header.Plan, AimSI: job.aimSI, Cautions: report.Cautions(), OnStatus: show,
	})
	closeErr := out.Close(job.clock.Now(), job.clock.Wall())
	if closeErr != nil {
		closeErr = &fileError{fmt.Errorf("closing %s: %w", job.path, closeErr)}
	}
	screen.end(summary)
	if err := errors.Join(err, closeErr); err != nil {
		return keepOrRemove(job.path, "tautramp analyze "+job.path, summary.Alarm, summary.Counters, err)
	}
	screen.line("recording: " + job.path)
	if summary.Alarm != "" {
		return &alarmError{summary.Alarm}
	}
	return nil
}

// keepOrRemove says where the data are when a capture fails, and what can be
// done with them; a recording that holds none is taken away again.
func keepOrRemove(path, use, alarm string, counters []pairing.Counters, err error) error {
	if alarm != "" {
		err = errors.Join(err, &alarmError{alarm})
	}
	for _, c := range counters {
		if c.Samples > 0 {
			return fmt.Errorf("%w\nwhat was captured is kept: %s", err, use)
		}
	}
	return errors.Join(err, os.Remove(path))
}

// operatorKeys turns lines typed on the terminal into host events. The reader
// of a terminal cannot be interrupted, so its goroutine is left to end with
// the program; nothing it reads after stop is used. What else is said passes
// through.
func operatorKeys(e env, said <-chan recording.Event) (<-chan recording.Event, func()) {
	if e.stdin == nil {
		return said, func() {}
	}
	events, done := make(chan recording.Event), make(chan struct{})
	go func() {
		for {
			select {
			case event := <-said:
				select {
				case events <- event:
				case <-done:
					return
				}
			case <-done:
				return
			}
		}
	}()
	go func() {
		for lines := bufio.NewScanner(e.stdin); lines.Scan(); {
			key := strings.TrimSpace(lines.Text())
			event, ok := keyEvent(key)
			if !ok {
				fmt.Fprintf(e.stderr, "key: %q is none of z, m, u\n", key) // lost at worst: nobody reads it
				continue
			}
			select {
			case events <- event:
			case <-done:
				return
			}
		}
	}()
	return events, func() { close(done) }
}

// keyHelp stands above every capture.
const keyHelp = "KEYS  z Enter: band slack now  m Enter: mark  u Enter: undo  Ctrl-C: end"

func keyEvent(key string) (recording.Event, bool) {
	switch {
	case key == "z":
		return recording.Event{Kind: recording.ZeroMark}, true
	case key == "u":
		return recording.Event{Kind: recording.Undo}, true
	case key == "m":
		return recording.Event{Kind: recording.Mark}, true
	case strings.HasPrefix(key, "m "):
		return recording.Event{Kind: recording.Mark, Text: strings.TrimSpace(key[2:])}, true
	}
	return recording.Event{}, false
}
