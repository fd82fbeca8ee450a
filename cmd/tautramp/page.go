package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"strings"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/port"
	"tautramp/cmd/tautramp/page"
)

// pageOptions is the page as asked for on the command line.
type pageOptions struct {
	serveFlags
	mill     string
	units    string
	ports    []string
	baud     int
	speed    float64
	patience time.Duration
	system   mill.System
}

func runPage(ctx context.Context, args []string, e env) error {
	var o pageOptions
	fs := flags("page", "", "Does the whole job in a browser: write down the mill, find the boards, ramp,\nresult. Files are kept in this folder. It runs until Ctrl-C.", e)
	o.serveFlags.add(fs)
	fs.StringVar(&o.mill, "mill", "mill.toml", "the mill's profile; the page writes it where there is none")
	fs.StringVar(&o.units, "units", "us", "units to begin with: us or si")
	fs.StringArrayVar(&o.ports, "port", nil, "a port to offer beside those that are found, such as tcp://host:port")
	fs.IntVar(&o.baud, "baud", 115200, "serial speed")
	fs.Float64Var(&o.speed, "speed", 1, "rehearsal only: the simulated rig's clock factor")
	fs.DurationVar(&o.patience, "patience", 20*time.Second, "how long a port that went away may take to come back")
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	var err error
	if o.system, err = mill.ParseSystem(o.units); err != nil {
		return &usageError{"--units: " + err.Error()}
	}
	if !(o.speed > 0) || o.speed > 1000 || o.patience <= 0 {
		return &usageError{"--speed must be above 0 and at most 1000, --patience above 0"}
	}
	server, err := o.start(ctx, func(access page.Access) page.Deps { return o.deps(access, e) }, e)
	if err != nil {
		return err
	}
	select {
	case <-ctx.Done():
		return server.close()
	case err := <-server.ended:
		return errors.Join(fmt.Errorf("the page: %w", err), server.close())
	}
}

// deps is what the page may do in this folder.
func (o *pageOptions) deps(access page.Access, e env) page.Deps {
	return page.Deps{
		Program: programVersion(), System: o.system, Access: access,
		Mill:     func() ([]byte, error) { return os.ReadFile(o.mill) },
		SaveMill: func(text []byte) error { return o.saveMill(text, e) },
		Ports:    func() ([]page.Port, error) { return o.listPorts() },
		Visit:    func(ctx context.Context, order page.Order) (page.Papers, error) { return o.visit(ctx, order, e) },
		Open:     openPapers, Card: o.card, Plans: benchPlans(),
		Bell: func() { fmt.Fprint(e.stderr, "\a") }, // lost at worst
	}
}

// saveMill writes the profile. One that was there is kept under another name:
// its remarks are not in the forms.
func (o *pageOptions) saveMill(text []byte, e env) error {
	old, err := os.ReadFile(o.mill)
	switch {
	case err == nil && string(old) != string(text):
		kept := strings.TrimSuffix(o.mill, ".toml") + "-until-" + e.wall().Format("20060102-150405") + ".toml"
		if err := writeAside(kept, e, func(w io.Writer) error { _, err := w.Write(old); return err }); err != nil {
			return err
		}
	case err != nil && !errors.Is(err, fs.ErrNotExist):
		return &fileError{err}
	}
	return writeAside(o.mill, e, func(w io.Writer) error { _, err := w.Write(text); return err })
}

// listPorts offers the ports of the command line first.
func (o *pageOptions) listPorts() ([]page.Port, error) {
	var out []page.Port
	for _, name := range o.ports {
		out = append(out, page.Port{Path: name, About: "named at the start", Named: true})
	}
	found, err := port.List()
	for _, p := range found {
		out = append(out, page.Port{Path: p.Path, About: strings.TrimSpace(p.Product + " " + p.Serial)})
	}
	if len(out) > 0 {
		return out, nil // what was named can be used
	}
	return nil, err
}

// visit records one order and computes its result.
func (o *pageOptions) visit(ctx context.Context, order page.Order, e env) (page.Papers, error) {
	if order.Kind == page.Bench {
		return o.benchTest(ctx, order, e)
	}
	c := captureOptions{profileFlags: profileFlags{mill: o.mill, tensioner: order.Tensioner, band: order.Band},
		ports: order.Ports, baud: o.baud, speed: o.speed, patience: o.patience, plan: order.Plan}
	w := order.Presses
	c.pressFlags = pressFlags{stepFlags{step: w.Step, from: w.From, top: w.Top, doubt: w.Doubt}, w.Dial}
	s, err := c.load(e)
	if err != nil {
		return page.Papers{}, err
	}
	c.out = order.Name(fileWord(s.tensioner.Name), e.wall())
	if err := refuseExisting(c.out); err != nil {
		return page.Papers{}, err
	}
	header, err := c.header(s, e)
	if err != nil {
		return page.Papers{}, err
	}
	header.Continues = order.Before.Seal
	job := recordJob{header: header, path: c.out, devices: c.devices(), system: o.system, patience: o.patience, said: order.Said, show: order.Show}
	if order.Kind == page.Verify {
		return o.verify(ctx, job, order.Before, e)
	}
	return recordPapers(ctx, job, e)
}
