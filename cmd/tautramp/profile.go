package main

import (
	"context"
	"fmt"
	"io"
	"os"

	"github.com/spf13/pflag"

	"tautramp/acquire/mill"
)

func runProfile(_ context.Context, args []string, e env) error {
	fs := flags("profile", "FILE", "Writes an example mill.toml with a comment on every line. Fill in your own mill's figures.", e)
	if err := parse(fs, args, 1, 1); err != nil {
		return err
	}
	path := fs.Arg(0)
	if path != "-" {
		if err := refuseExisting(path); err != nil {
			return err
		}
	}
	err := writeAside(path, e, func(w io.Writer) error {
		_, err := w.Write(mill.Example())
		return err
	})
	if err != nil || path == "-" {
		return err
	}
	_, err = fmt.Fprintf(e.stdout, "%s is written: an invented mill. Put your own figures in, then: tautramp check %s\n", path, path)
	return err
}

// profileFlags choose a mill, a tensioner and a band.
type profileFlags struct{ mill, tensioner, band, instruments string }

func (p *profileFlags) add(fs *pflag.FlagSet, millDefault, about string) {
	fs.StringVar(&p.mill, "mill", millDefault, about)
	fs.StringVar(&p.instruments, "instruments", "", instrumentsAbout)
	fs.StringVar(&p.tensioner, "tensioner", "", "name of the tensioner in mill.toml (needed when there are several)")
	fs.StringVar(&p.band, "band", "", "name of the band in mill.toml (needed when there are several)")
}

// site is a profile with one tensioner and one band chosen.
type site struct {
	text      []byte
	profile   *mill.Profile
	tensioner mill.Tensioner
	band      mill.Band
}

func (p *profileFlags) load(e env) (site, error) {
	var s site
	var err error
	if s.text, s.profile, err = readProfile(p.mill); err != nil {
		return s, err
	}
	if p.instruments != "" {
		if s.text, err = withInstruments(s.text, p.instruments); err != nil {
			return s, err
		}
		if s.profile, err = mill.Parse(s.text); err != nil {
			return s, fmt.Errorf("%s with %s: %w", p.mill, p.instruments, err)
		}
	}
	if s.tensioner, err = s.profile.FindTensioner(p.tensioner); err != nil {
		return s, fmt.Errorf("--tensioner: %w", err)
	}
	if s.band, err = s.profile.FindBand(p.band); err != nil {
		return s, fmt.Errorf("--band: %w", err)
	}
	return s, nil
}

// readProfile reads a mill.toml; "" is the example.
func readProfile(path string) (text []byte, p *mill.Profile, err error) {
	if path == "" {
		path, text = "the example", mill.Example()
	} else if text, err = os.ReadFile(path); err != nil {
		return nil, nil, fmt.Errorf("no mill profile: %w", err)
	}
	if p, err = mill.Parse(text); err != nil {
		return text, nil, fmt.Errorf("%s: %w", path, err)
	}
	return text, p, nil
}
