package report

import (
	"bytes"
	_ "embed"
	"html/template"
	"io"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

//go:embed sheet.html
var sheetHTML string

//go:embed sheet.css
var sheetCSS string

// page is what the template sees.
type page struct {
	sheet
	Style     template.CSS
	Loop      picture
	Width     picture
	Residuals picture
	Note      string // below the table
	Name      string // of the file, for the title
}

// HTML writes the report as one page that needs nothing else: no scripts, no
// other files. It prints on A4 and Letter. Errors are the writer's.
func HTML(w io.Writer, r *analyze.Result, m Meta, s mill.System) error {
	t, err := template.New("sheet").Funcs(template.FuncMap{"typeset": typeset, "arrow": arrow}).Parse(sheetHTML)
	if err != nil {
		return err
	}
	sh := newSheet(r, m, s)
	p := page{
		sheet: sh, Style: template.CSS(sheetCSS), Name: m.base(),
		Loop:      inline(loopChart(r, m, sh.Units), wide(), "loop"),
		Width:     inline(widthChart(r, sh.Units), narrow(), "width"),
		Residuals: inline(residualChart(r, sh.Units), narrow(), "residuals"),
		Note:      cellNote(sh.Table.Rows),
	}
	var b bytes.Buffer
	if err := t.Execute(&b, p); err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}

// wide and narrow are the pictures of the page at their size on paper.
func wide() format   { return format{width: 343, height: 150, letters: 8} }
func narrow() format { return format{width: 166, height: 92, letters: 7.2} }

// picture is a chart in the page. Its text is escaped where it is drawn, so it
// may pass as HTML.
type picture struct {
	Drawn template.HTML
	Says  string
}

func inline(c chart, f format, id string) picture {
	return picture{template.HTML(c.svg(f, id)), c.says}
}

// typeset puts on paper what a terminal writes with plain letters.
func typeset(text string) string {
	return strings.NewReplacer(" +/- ", "\u00a0\u00b1\u00a0", "+/-", "\u00b1", " in2", "\u00a0in\u00b2", " mm2", "\u00a0mm\u00b2").Replace(text)
}

// arrow is the direction as a sign, always beside its word.
func arrow(d analyze.Direction) string {
	if d == analyze.Falling {
		return "\u2193"
	}
	return "\u2191"
}
