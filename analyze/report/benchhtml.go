package report

import (
	"bytes"
	_ "embed"
	"html/template"
	"io"

	"tautramp/analyze/gauge"
)

//go:embed bench.html
var benchHTML string

//go:embed bench.css
var benchCSS string

// benchPage is what the template sees.
type benchPage struct {
	benchSheet
	Style template.CSS
	Plots []picture
	Name  string
}

// BenchHTML writes a bench result as one page that needs nothing else, like
// HTML. Errors are the writer's.
func BenchHTML(w io.Writer, r *gauge.Result, m Meta) error {
	t, err := template.New("bench").Funcs(template.FuncMap{"typeset": typeset}).Parse(benchHTML)
	if err != nil {
		return err
	}
	p := benchPage{benchSheet: newBenchSheet(r, m), Style: template.CSS(sheetCSS + benchCSS), Name: m.base()}
	y := errorAxis(r, p.Units)
	f := format{width: 520, height: 190, letters: 8.6}
	if len(r.Curves) > 1 {
		f = format{width: 262, height: 170, letters: 8.2}
	}
	for _, c := range r.Curves {
		p.Plots = append(p.Plots, inline(errorChart(r, c, p.Units, y), f, "errors"+string(c.Series)))
	}
	var b bytes.Buffer
	if err := t.Execute(&b, p); err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}

// BenchSVG writes the error plot of the first series as one SVG picture. The
// error is the writer's.
func BenchSVG(w io.Writer, r *gauge.Result) error {
	u := benchUnitsOf(r)
	_, err := io.WriteString(w, errorChart(r, r.Curves[0], u, errorAxis(r, u)).svg(alone(), ""))
	return err
}
