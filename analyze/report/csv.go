package report

import (
	"encoding/csv"
	"io"
	"strconv"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// CSV writes the table at round settings, both directions in a row (RFC 4180
// with LF line ends): value, half-width of the 95 % interval and the number's
// unit in the heading, all rounded as on paper. The last columns repeat which
// recording the row is from, whether it is a rehearsal, which no tensioner is to
// be set by, and from which band it was predicted. Errors are the writer's.
func CSV(w io.Writer, r *analyze.Result, m Meta, s mill.System) error {
	u := unitsFor(r.Setup.Tensioner, s)
	table := rowsOf(r, u)
	out := csv.NewWriter(w)
	stress := " (" + u.stress.name + ")"
	records := [][]string{{
		"setting (" + u.setting.name + ")",
		"rising: band stress" + stress, "rising: 95 % half-width" + stress,
		"falling: band stress" + stress, "falling: 95 % half-width" + stress,
		"tensioner", "band", "recording", "seal", "rehearsal", "predicted from",
	}}
	for _, row := range table.Rows {
		rising, risingHalf := csvFigure(row.Rising)
		falling, fallingHalf := csvFigure(row.Falling)
		records = append(records, []string{
			ungrouped(row.Setting), rising, risingHalf, falling, fallingHalf,
			cellText(named(r.Setup.Tensioner.Name, notKnown)), cellText(named(r.Setup.Band.Name, notKnown)),
			cellText(named(m.base(), notKnown)), cellText(m.seal()),
			strconv.FormatBool(rehearsed(r, m)), predictedFrom(r),
		})
	}
	return out.WriteAll(records)
}

// PairsCSV writes every pair as the analysis saw it, in time order. Errors are
// the writer's.
func PairsCSV(w io.Writer, r *analyze.Result, s mill.System) error {
	u := unitsFor(r.Setup.Tensioner, s)
	out := csv.NewWriter(w)
	if err := out.Write([]string{
		"time (s)", "setting (" + u.setting.name + ")", "stretch as indicated (" + u.extension.name + ")",
		"band stress (" + u.stress.name + ")", "phase", "cycle", "fitted",
	}); err != nil {
		return err
	}
	for _, p := range r.Points {
		cycle := "none"
		if p.Cycle >= 0 {
			cycle = strconv.Itoa(p.Cycle + 1)
		}
		if err := out.Write([]string{
			raw(p.T, 3), raw(u.setting.show(p.SettingSI), 4), raw(u.extension.show(p.ExtensionM), 6), raw(u.stress.show(p.Stress), 4),
			cellText(string(p.Phase)), cycle, strconv.FormatBool(p.Fitted),
		}); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}

// raw is a reading without an interval of its own.
func raw(x float64, decimals int) string {
	if !finite(x) {
		return notKnown
	}
	return strconv.FormatFloat(x, 'f', decimals, 64)
}

// csvFigure is a figure in two cells; an unknown one says so in the first.
func csvFigure(f figure) (value, half string) {
	if f.Why != "" {
		return notKnown + ": " + f.Why, notKnown
	}
	if f.PlusMinus == "" {
		return ungrouped(f.Value), notKnown
	}
	return ungrouped(f.Value), ungrouped(f.PlusMinus)
}

// cellText keeps text from outside from being read as a formula by a
// spreadsheet.
func cellText(text string) string {
	if text != "" && (text[0] == '=' || text[0] == '+' || text[0] == '-' || text[0] == '@') {
		return "'" + text
	}
	return text
}

// ungrouped takes the commas between thousands out again.
func ungrouped(number string) string {
	out := make([]byte, 0, len(number))
	for i := range len(number) {
		if number[i] != ',' {
			out = append(out, number[i])
		}
	}
	return string(out)
}
