package main

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"net"
	"os"
	"slices"
	"strconv"
	"strings"
	"sync"

	"github.com/spf13/pflag"

	"tautramp/acquire"
	"tautramp/acquire/port"
	"tautramp/acquire/simrig"
)

// What the example profile is rehearsed with.
const (
	demoTensioner = "T-1"
	demoBand      = "QW-6"
)

// queueBytes may wait for the line on each board in life; a faster clock lets as
// much more wait.
const queueBytes = 1 << 18

// rigOptions is one rehearsal rig as asked for on the command line; the demo
// uses them too.
type rigOptions struct {
	profileFlags
	boards     int
	shape      string
	law        string
	exercise   int
	ramps      int
	rate       string
	top        string
	leastCount string
	ppm        float64
	seed       uint64
	speed      float64
	tcp        []string
	links      []string
	log        string
	bench      rigBench
	low        string
	steps      int
	presses    bool
	faults     []string

	thermometers bool
}

func runRig(ctx context.Context, args []string, e env) error {
	var o rigOptions
	fs := flags("rig", "", "Runs a simulated mill: tensioner, band, sensors and boards, on a port of its own.\nThe ramps begin when a capture starts it. It runs until Ctrl-C.", e)
	o.add(fs)
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	if o.mill == "" && o.tensioner == "" && o.band == "" {
		o.tensioner, o.band = demoTensioner, demoBand
	}
	if o.bench.plan != "" {
		return o.serveBench(ctx, e)
	}
	if slices.Contains(o.faults, "list") {
		return listFaults(e.stdout)
	}
	r, err := o.build(e)
	if err != nil {
		return err
	}
	if o.log != "" {
		if err := refuseExisting(o.log); err != nil {
			return err
		}
		return writeAside(o.log, e, r.WriteLog)
	}
	return o.serve(ctx, r, e)
}

func (o *rigOptions) add(fs *pflag.FlagSet) {
	o.profileFlags.add(fs, "", "the mill's profile, with a rehearsal table (default: the example's)")
	fs.IntVar(&o.boards, "boards", 1, "1: one board with both sensors; 2: one each, with clocks of their own")
	fs.StringVar(&o.shape, "drive", string(simrig.Smooth), "how the operator pumps: "+join(simrig.Shapes()))
	fs.StringVar(&o.law, "friction", string(simrig.Dahl), "friction law of the wheel: "+join(simrig.Laws()))
	fs.IntVar(&o.exercise, "exercise", 1, "exercise cycles first, to half of the top")
	fs.IntVar(&o.ramps, "ramps", 3, "ramps after them")
	fs.StringVar(&o.rate, "rate", "", "pressure a second, such as \"8 psi\"; of a screw the turn, such as \"10 deg\"")
	fs.StringVar(&o.top, "top", "", "setting at the top of a ramp, such as \"860 psi\" or \"20 N m\"")
	fs.StringVar(&o.leastCount, "least-count", "", "of the indicator, such as \"0.0005 in\" (default 0.00005 in)")
	fs.BoolVar(&o.thermometers, "thermometers", false, "fit thermometers to band and measuring bar, on the first board")
	fs.Float64Var(&o.ppm, "ppm", 300, "parts per million by which the second board's clock runs fast")
	fs.Uint64Var(&o.seed, "seed", 1, "of all noise")
	fs.Float64Var(&o.speed, "speed", 1, "clock factor; give capture the same")
	fs.StringArrayVar(&o.tcp, "tcp", nil, "serve on this address instead of a pseudo-terminal, such as 127.0.0.1:7117; once for each board")
	fs.StringArrayVar(&o.links, "link", nil, "fixed name for the port, a link to it; once for each board")
	fs.StringVar(&o.low, "low", "", "pressure at the low end, where the band is slack, such as \"20 psi\"")
	fs.IntVar(&o.steps, "steps", 8, "of --drive stairs, to the top")
	fs.BoolVar(&o.presses, "presses", false, "the operator presses the switch near the end of each wait, on steps and at both ends")
	o.bench.add(fs)
	fs.StringArrayVar(&o.faults, "fault", nil, "something wrong with it, KIND=SIZE with the size in SI, such as \"stick-slip=0.05\"; give it again for another; \"list\" shows the kinds")
	fs.StringVar(&o.log, "log", "", "write the lines as a memory card would hold them to this file, and stop")
}

func join[T ~string](words []T) string {
	var texts []string
	for _, w := range words {
		texts = append(texts, string(w))
	}
	return strings.Join(texts, ", ")
}

// build makes the rig, whole or not at all.
func (o *rigOptions) build(e env) (*simrig.Rig, error) {
	s, err := o.load(e)
	if err != nil {
		return nil, err
	}
	boards, err := o.boardSpecs()
	if err != nil {
		return nil, err
	}
	c := simrig.Config{
		Profile: s.profile, Tensioner: s.tensioner.Name, Band: s.band.Name, Seed: o.seed,
		Law:    simrig.Law{Kind: simrig.LawKind(o.law)},
		Drive:  simrig.Drive{Shape: simrig.Shape(o.shape), Exercise: noneIfZero(o.exercise), Ramps: noneIfZero(o.ramps), Repeat: true, Steps: o.steps, Presses: o.presses},
		Boards: boards,
	}
	if err := o.pace(s.tensioner, &c.Drive); err != nil {
		return nil, err
	}
	if o.leastCount != "" {
		if c.Indicator.Count, err = parseLeastCount(o.leastCount); err != nil {
			return nil, err
		}
	}
	c.Thermometer, c.RigThermometer = o.thermometers, o.thermometers
	if err := o.plant(&c); err != nil {
		return nil, err
	}
	rig, err := simrig.New(c)
	if errors.Is(err, simrig.ErrConfig) || errors.Is(err, simrig.ErrOverLimit) {
		err = &usageError{err.Error()}
	}
	return rig, err
}

// noneIfZero turns the command line's "0 = none" into the rig's "negative =
// none".
func noneIfZero(n int) int {
	if n == 0 {
		return -1
	}
	return n
}

// parseLeastCount keeps the digits as written, for the wire wants a whole
// number and a power of ten.
func parseLeastCount(text string) (simrig.Count, error) {
	bad := &usageError{fmt.Sprintf("--least-count: %q is not a number with in, mm or um, such as \"0.0005 in\"", text)}
	number, unit, _ := strings.Cut(strings.TrimSpace(text), " ")
	code, ok := map[string]string{"in": "[in_i]", "mm": "mm", "um": "um"}[strings.TrimSpace(unit)]
	if !ok {
		return simrig.Count{}, bad
	}
	whole, decimals, _ := strings.Cut(number, ".")
	mantissa, err := strconv.ParseInt(whole+decimals, 10, 32)
	if err != nil || mantissa <= 0 || len(decimals) > 9 {
		return simrig.Count{}, bad
	}
	return simrig.Count{Unit: code, Mantissa: int32(mantissa), Exponent: int8(-len(decimals))}, nil
}

// serve runs every board on a port of its own until the context ends.
func (o *rigOptions) serve(ctx context.Context, r *simrig.Rig, e env) error {
	boards := r.Boards()
	if len(o.tcp) > 0 && len(o.tcp) != len(boards) || len(o.links) > 0 && len(o.links) != len(boards) {
		return &usageError{fmt.Sprintf("--tcp and --link are given once for each board, here %d times", len(boards))}
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	clock := e.clock(o.speed)
	var wait sync.WaitGroup
	errs := make([]error, len(boards))
	for i, board := range boards {
		end, err := o.openEnd(i)
		if err != nil {
			return errors.Join(err, cancelled(cancel, &wait))
		}
		defer end.close()
		if _, err := fmt.Fprintf(e.stdout, "board %d: %s\n", i+1, end.name); err != nil {
			return err
		}
		wait.Go(func() {
			defer cancel()
			errs[i] = end.serve(ctx, board, clock)
		})
	}
	wait.Wait()
	return errors.Join(errs...)
}

func cancelled(cancel context.CancelFunc, wait *sync.WaitGroup) error {
	cancel()
	wait.Wait()
	return nil
}

// boardEnd is the board's side of a line that a capture can open.
type boardEnd struct {
	name  string
	serve func(context.Context, *simrig.Board, acquire.Clock) error
	close func()
}

func (o *rigOptions) openEnd(i int) (boardEnd, error) {
	if len(o.tcp) > 0 {
		return openListener(o.tcp[i])
	}
	pair, err := port.NewPair()
	if err != nil {
		return boardEnd{}, fmt.Errorf("%w; use --tcp 127.0.0.1:7117", err)
	}
	end := boardEnd{name: pair.Path, close: func() { pair.Close() }} // the rig ends: nobody is left to tell
	end.serve = func(ctx context.Context, b *simrig.Board, clock acquire.Clock) error {
		return endedByContext(ctx, b.Serve(ctx, pair, clock))
	}
	if len(o.links) == 0 {
		return end, nil
	}
	link := o.links[i]
	if err := linkTo(pair.Path, link); err != nil {
		end.close()
		return boardEnd{}, &fileError{fmt.Errorf("--link: %w", err)}
	}
	end.name = link
	end.close = func() { os.Remove(link); pair.Close() } // as above
	return end, nil
}

// linkTo gives a port a fixed name, in the place of a link to nowhere that a
// killed rig left.
func linkTo(path, link string) error {
	if old, err := os.Readlink(link); err == nil {
		if _, err := os.Stat(old); errors.Is(err, fs.ErrNotExist) || old == path {
			if err := os.Remove(link); err != nil {
				return err
			}
		}
	}
	return os.Symlink(path, link)
}

// endedByContext takes back the error that the end of the context made.
func endedByContext(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return nil
	}
	return err
}

// openListener serves one caller after another on a TCP address.
func openListener(address string) (boardEnd, error) {
	listener, err := net.Listen("tcp", address)
	if err != nil {
		return boardEnd{}, fmt.Errorf("%w: %w", port.ErrBadName, err)
	}
	end := boardEnd{name: "tcp://" + listener.Addr().String(), close: func() { listener.Close() }}
	end.serve = func(ctx context.Context, b *simrig.Board, clock acquire.Clock) error {
		stop := context.AfterFunc(ctx, end.close)
		defer stop()
		for {
			conn, err := listener.Accept()
			if err != nil {
				return endedByContext(ctx, err)
			}
			if err := b.Serve(ctx, conn, clock); err != nil && !errors.Is(err, simrig.ErrLineGone) {
				return endedByContext(ctx, err)
			}
		}
	}
	return end, nil
}
