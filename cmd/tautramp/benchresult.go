package main

import (
	"fmt"
	"io"
	"path/filepath"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/analyze/report"
	"tautramp/cmd/tautramp/station"
)

// computeBench reads the recordings of a bench test and works it out. It is the
// only way to a bench result in this program.
func computeBench(path string) (*gauge.Result, report.Meta, error) {
	none := report.Meta{File: filepath.Base(path)}
	chain, err := readChain(path)
	if err != nil {
		return nil, none, err
	}
	bench, err := station.Read(chain...)
	if err != nil {
		return nil, none, fmt.Errorf("%s: %w", path, err)
	}
	res, err := gauge.Evaluate(bench.Test(chain[len(chain)-1].Seal))
	if err != nil {
		return nil, none, fmt.Errorf("%s: %w", path, err)
	}
	return res, benchMeta(path, chain, bench.Lost()), nil
}

// analyzeBench computes the result of a bench test and puts it where the flags
// say.
func analyzeBench(path string, r resultFlags, cautionsShown bool, e env) error {
	if err := refuseSame(path, r.outputs()...); err != nil {
		return err
	}
	if r.pairs != "" || r.png != "" {
		return &usageError{"a bench test has no pairs and no PNG; --json, --csv, --html, --svg and --record are there"}
	}
	res, meta, err := computeBench(path)
	if err != nil {
		return err
	}
	meta.CautionsShown = cautionsShown
	if r.textOnScreen() {
		if err := report.BenchText(e.stdout, res, meta); err != nil {
			return err
		}
	}
	return writeAll([]output{
		{r.json, func(w io.Writer) error { return report.BenchJSON(w, res, meta) }},
		{r.csv, func(w io.Writer) error { return report.BenchCSV(w, res, meta) }},
		{r.html, func(w io.Writer) error { return report.BenchHTML(w, res, meta) }},
		{r.svg, func(w io.Writer) error { return report.BenchSVG(w, res) }},
		{r.record, func(w io.Writer) error {
			if res.Test.Conditions.Simulated {
				if _, err := fmt.Fprintln(w, "# REHEARSAL: made up by a simulated bench. It does not belong into any mill.toml."); err != nil {
					return err
				}
			}
			_, err := w.Write(mill.EncodeInstruments([]mill.Instrument{res.Record()}))
			return err
		}},
	}, e)
}

// benchMeta is where a bench result comes from.
func benchMeta(path string, chain []*recording.Recording, lost []pairing.Counters) report.Meta {
	last := chain[len(chain)-1]
	meta := report.Meta{
		File: filepath.Base(path), Seal: last.Seal, Outcome: string(last.Outcome), TailBytes: last.TailBytes,
		Program: programVersion(), Recorder: last.Header.Program,
		Started: chain[0].Header.Started, ClockFactor: last.Header.ClockFactor, Continues: last.Header.Continues,
		Notes: lostNotes(lost),
	}
	if len(chain) > 1 {
		meta.Notes = append(meta.Notes, fmt.Sprintf("the test was broken off and gone on with: it is in %d recordings", len(chain)))
	}
	return meta
}
