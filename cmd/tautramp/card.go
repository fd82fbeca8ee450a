package main

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"slices"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze"
	"tautramp/analyze/report"
)

// cardFlags is what somebody asks of a card.
type cardFlags struct {
	from, hold, proof, units, target, out string
	bands                                 []string
	sameWheel                             bool
}

func runCard(_ context.Context, args []string, e env) error {
	var c cardFlags
	fs := flags("card", "FILE.ramp", "Writes the card that hangs at the tensioner, as one web page to print.", e)
	fs.StringVar(&c.from, "from", "", "side from which the number is approached: below or above (must be given)")
	fs.StringVar(&c.hold, "hold", "", "what becomes of the pressure once it is set: maintained or locked (default: as mill.toml says)")
	fs.StringVar(&c.proof, "proof", "", "recording of a fresh approach to the number, band slack first: the card is refused where it disagrees")
	fs.StringSliceVar(&c.bands, "band", nil, "further bands of mill.toml for the card, worked out from the one that was measured")
	fs.BoolVar(&c.sameWheel, "same-wheel", false, "you confirm that with those bands the same weight is moved and the wheel stands where it stood")
	fs.StringVar(&c.target, "target", "", "band stress wanted, such as \"9500 psi\" (default: the band's in mill.toml)")
	fs.StringVar(&c.units, "units", "us", "units in large print: us or si; the other stands beside it")
	fs.StringVar(&c.out, "out", "", "write the card to this file (must be given; - for the screen)")
	if err := parse(fs, args, 1, 1); err != nil {
		return err
	}
	if c.out == "" {
		return &usageError{"card: --out names the file to write, such as --out card.html"}
	}
	results := resultFlags{units: c.units, target: c.target, html: c.out, plot: string(report.PlotLoop)}
	system, target, err := results.check()
	if err != nil {
		return err
	}
	order, err := c.order()
	if err != nil {
		return err
	}
	path := fs.Arg(0)
	if err := refuseSame(path, c.out); err != nil {
		return err
	}
	res, meta, err := computeResult(path, target)
	if err != nil {
		return err
	}
	if order.Others, err = othersOf(res, c.bands); err != nil {
		return err
	}
	if c.proof != "" {
		if order.Proof, err = proofOf(res, path, c.proof); err != nil {
			return err
		}
	}
	return writeCard(c.out, res, meta, order, system, e)
}

func writeCard(out string, res *analyze.Result, meta report.Meta, order report.CardOrder, system mill.System, e env) error {
	var card bytes.Buffer // made first: a refused card is no trouble with a file
	if err := report.Card(&card, res, meta, order, system); err != nil {
		return err
	}
	if err := writeAside(out, e, func(w io.Writer) error { _, err := w.Write(card.Bytes()); return err }); err != nil {
		return err
	}
	if out == "-" {
		return nil
	}
	_, err := fmt.Fprintf(e.stderr, "written: %s\n", out)
	return err
}

// order words the flags.
func (c cardFlags) order() (report.CardOrder, error) {
	o := report.CardOrder{SameWheel: c.sameWheel}
	switch c.from {
	case "below":
		o.Direction = analyze.Rising
	case "above":
		o.Direction = analyze.Falling
	case "":
	default:
		return o, &usageError{fmt.Sprintf("--from: %q is neither below nor above", c.from)}
	}
	switch o.Hold = mill.Hold(c.hold); o.Hold {
	case "", mill.HoldMaintained, mill.HoldLocked:
		return o, nil
	}
	return o, &usageError{fmt.Sprintf("--hold: %q is neither maintained nor locked", c.hold)}
}

// proofOf reads the recording of a fresh approach and compares it with the
// result. Both must be of one tensioner and band.
func proofOf(res *analyze.Result, path, proof string) (*analyze.Approach, error) {
	rec, err := recording.ReadFile(proof)
	if err != nil {
		return nil, err
	}
	return approachIn(rec, res, path, proof)
}

// approachIn compares the fresh approach that a recording holds with a result;
// the two names are for messages.
func approachIn(rec *recording.Recording, res *analyze.Result, path, proof string) (*analyze.Approach, error) {
	if t, b := rec.Header.Tensioner, rec.Header.Band; t != res.Setup.Tensioner.Name || b != res.Setup.Band.Name {
		return nil, &usageError{fmt.Sprintf("%s is of %s with %s, and %s of %s with %s: it proves nothing there", proof, t, b, path, res.Setup.Tensioner.Name, res.Setup.Band.Name)}
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", proof, err)
	}
	a, err := res.CheckApproach(set)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", proof, err)
	}
	return &a, nil
}

// othersOf predicts the result for each further band.
func othersOf(res *analyze.Result, names []string) ([]*analyze.Result, error) {
	var others []*analyze.Result
	for _, name := range names {
		i := slices.IndexFunc(res.Setup.Bands, func(b mill.Band) bool { return b.Name == name })
		if i < 0 {
			return nil, fmt.Errorf("--band %s: %w", name, mill.ErrUnknownName)
		}
		if name == res.Setup.Band.Name {
			continue
		}
		other, err := res.ForBand(res.Setup.Bands[i], mill.Pressure{})
		if err != nil {
			return nil, err
		}
		others = append(others, other)
	}
	return others, nil
}
