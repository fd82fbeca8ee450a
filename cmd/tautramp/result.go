package main

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"time"

	"github.com/spf13/pflag"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze"
	"tautramp/analyze/findings"
	"tautramp/analyze/report"
)

// resultFlags are the ways a result leaves the program; capture and analyze
// share them, and share computeResult, so that both give the same bytes.
type resultFlags struct {
	before string // recording of the condition found; "" for none
	trials int    // by which the intervals are checked; 0: not
	units  string
	target string
	json   string
	csv    string
	pairs  string
	html   string
	svg    string
	png    string
	plot   string
	record string // of the tested instrument; bench tests only

	instruments string // analyze: records in the place of the recording's
}

func (r *resultFlags) add(fs *pflag.FlagSet) {
	fs.StringVar(&r.units, "units", "us", "units on screen and paper: us or si")
	fs.StringVar(&r.target, "target", "", "band stress wanted, such as \"9500 psi\" (default: the band's in mill.toml)")
	fs.StringVar(&r.html, "html", "", "write the report as one web page to this file")
	fs.StringVar(&r.json, "json", "", "write every figure as JSON, SI units, to this file (- for the screen)")
	fs.StringVar(&r.csv, "csv", "", "write the table at round settings to this file (- for the screen)")
	fs.StringVar(&r.pairs, "pairs", "", "write every pair with its phase and cycle to this file (- for the screen)")
	fs.StringVar(&r.svg, "svg", "", "write a plot as SVG to this file")
	fs.StringVar(&r.png, "png", "", "write a plot as PNG to this file")
	fs.StringVar(&r.record, "record", "", "bench test: write the record of the tested instrument, with its corrections, to this .toml file")
	fs.StringVar(&r.plot, "plot", string(report.PlotLoop), "which plot --svg and --png show: "+plotNames())
}

func plotNames() string {
	var b bytes.Buffer
	for i, p := range report.Plots() {
		if i > 0 {
			b.WriteString(", ")
		}
		b.WriteString(string(p))
	}
	return b.String()
}

// check refuses what cannot be obeyed before any work is done.
func (r *resultFlags) check() (mill.System, mill.Pressure, error) {
	system, err := mill.ParseSystem(r.units)
	if err != nil {
		return "", mill.Pressure{}, &usageError{"--units: " + err.Error()}
	}
	if !report.Plot(r.plot).Known() {
		return "", mill.Pressure{}, &usageError{fmt.Sprintf("--plot: %q is none of %s", r.plot, plotNames())}
	}
	var target mill.Pressure
	if r.target != "" {
		q, err := mill.ParseQuantity(r.target, mill.DimPressure)
		if err != nil {
			return "", target, &usageError{"--target: " + err.Error()}
		}
		if !(q.SI > 0) {
			return "", target, &usageError{fmt.Sprintf("--target: %s is no band stress to set a band to", r.target)}
		}
		target.Quantity = q
	}
	if r.record != "" {
		if filepath.Ext(r.record) != ".toml" {
			return "", target, &usageError{fmt.Sprintf("--record %s: the name of an instrument record ends in .toml", r.record)}
		}
		if err := refuseExisting(r.record); err != nil {
			return "", target, err
		}
	}
	return system, target, checkOutputs(r.outputs())
}

func (r *resultFlags) outputs() []string {
	return []string{r.json, r.csv, r.pairs, r.html, r.svg, r.png}
}

// textOnScreen is false where a machine-readable result goes to the screen.
func (r *resultFlags) textOnScreen() bool { return r.json != "-" && r.csv != "-" && r.pairs != "-" }

// errBenchTest is a recording of a bench test where one of a visit is wanted.
var errBenchTest = errors.New("it is a recording of a bench test, not of a visit to a tensioner")

// computeResult reads a recording file and analyses it. It is the only way to
// a result in this program.
func computeResult(path string, target mill.Pressure) (*analyze.Result, report.Meta, error) {
	rec, err := recording.ReadFile(path)
	if err != nil {
		return nil, report.Meta{}, err
	}
	return resultOf(rec, path, target)
}

// resultOf analyses a recording that was read; path is its name.
func resultOf(rec *recording.Recording, path string, target mill.Pressure) (*analyze.Result, report.Meta, error) {
	return resultBy(rec, path, target, "")
}

// resultBy is resultOf with the file that instrument records of the recording's
// profile were replaced from; "" for none.
func resultBy(rec *recording.Recording, path string, target mill.Pressure, records string) (*analyze.Result, report.Meta, error) {
	if rec.Header.Bench != nil {
		return nil, report.Meta{}, fmt.Errorf("%s: %w", path, errBenchTest)
	}
	set, err := pairing.FromRecording(rec)
	if err != nil {
		return nil, report.Meta{}, fmt.Errorf("%s: %w", path, err)
	}
	res, err := analyze.Analyze(analyze.Input{
		Profile: rec.Header.Parsed, Tensioner: rec.Header.Tensioner, Band: rec.Header.Band,
		Target: target, Set: set, Day: measuredOn(rec.Header), Records: records,
	})
	if err != nil {
		return nil, report.Meta{}, fmt.Errorf("%s: %w%s", path, err, seenAnyway(rec.Header.Parsed, set))
	}
	meta := reportMeta(path, rec, set)
	meta.Found = findings.Look(findings.Input{Profile: rec.Header.Parsed, Result: res, Set: res.Set()})
	return res, meta, nil
}

// seenAnyway is what a recording shows of which no line could be fitted, to stand
// behind the error; nothing where it shows nothing.
func seenAnyway(p *mill.Profile, set *pairing.Set) string {
	text := ""
	for _, f := range findings.Look(findings.Input{Profile: p, Set: set}).Findings {
		text += fmt.Sprintf("; seen in it: %s (%s certainty)", f.Name, f.Word)
	}
	return text
}

// measuredOn is the day of the measurement; a memory card carries none.
func measuredOn(h recording.Header) time.Time {
	if h.Source == recording.Imported {
		return time.Time{}
	}
	return h.Started
}

func reportMeta(path string, rec *recording.Recording, set *pairing.Set) report.Meta {
	meta := report.Meta{
		File: filepath.Base(path), Seal: rec.Seal, Outcome: string(rec.Outcome), TailBytes: rec.TailBytes,
		Program: programVersion(), Recorder: rec.Header.Program,
		Started: rec.Header.Started, Imported: rec.Header.Source == recording.Imported, ClockFactor: rec.Header.ClockFactor, Continues: rec.Header.Continues,
		Notes: append([]string(nil), set.Warnings...),
	}
	meta.Notes = append(meta.Notes, lostNotes(set.Counters)...)
	meta.Notes = append(meta.Notes, notConfirmed(rec)...)
	return meta
}

// lostNotes says what went missing on the way.
func lostNotes(counters []pairing.Counters) (notes []string) {
	for _, c := range counters {
		if c.Lost > 0 || c.Rejected > 0 || c.Restarts > 0 {
			notes = append(notes, fmt.Sprintf("device %d: %d lines lost (%d by its own count), %d refused, %d restarts",
				c.Device+1, c.Lost, c.DeviceSaid, c.Rejected, c.Restarts))
		}
	}
	return notes
}

// notConfirmed is what the operator was asked to confirm and did not.
func notConfirmed(rec *recording.Recording) []string {
	var out []string
	for _, e := range rec.Entries {
		if e.Event != nil && e.Event.Kind == recording.Confirmed && strings.HasPrefix(e.Event.Text, "not confirmed: ") {
			out = append(out, e.Event.Text)
		}
	}
	return out
}

// write puts a result wherever the flags say: on the screen first, for a full
// disk must not keep it from there.
func (r *resultFlags) write(res *analyze.Result, meta report.Meta, system mill.System, e env) error {
	if r.textOnScreen() {
		if err := report.Text(e.stdout, res, meta, system); err != nil {
			return err
		}
	}
	plot := report.Plot(r.plot)
	return writeAll([]output{
		{r.json, func(w io.Writer) error { return report.JSON(w, res, meta) }},
		{r.csv, func(w io.Writer) error { return report.CSV(w, res, meta, system) }},
		{r.pairs, func(w io.Writer) error { return report.PairsCSV(w, res, system) }},
		{r.html, func(w io.Writer) error { return report.HTML(w, res, meta, system) }},
		{r.svg, func(w io.Writer) error { return report.SVG(w, res, meta, plot, system) }},
		{r.png, func(w io.Writer) error { return report.PNG(w, res, meta, plot, system) }},
	}, e)
}

// output is one file that a result goes to; its path is "" where nobody asked
// for it.
type output struct {
	path  string
	write func(io.Writer) error
}

func writeAll(outputs []output, e env) error {
	for _, out := range outputs {
		if out.path == "" {
			continue
		}
		if err := writeAside(out.path, e, out.write); err != nil {
			return err
		}
		if out.path != "-" {
			if _, err := fmt.Fprintf(e.stderr, "written: %s\n", out.path); err != nil {
				return err
			}
		}
	}
	return nil
}
