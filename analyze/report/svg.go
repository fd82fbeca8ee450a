package report

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"strings"

	"gonum.org/v1/plot/vg/vgsvg"
)

// fontStack is asked for in place of the one font that the picture was measured
// with; the first three have the same widths.
const fontStack = "'Liberation Sans',Arial,Helvetica,Arimo,sans-serif"

// dressSVG makes the canvas a picture that stands alone: no generator's
// comment, a title and a description for those who cannot see it, fonts that
// every machine has. With an id it becomes a part of a page: no prolog, no
// size.
func dressSVG(canvas *vgsvg.Canvas, c chart, f format, id string) string {
	var drawn bytes.Buffer
	if _, err := canvas.WriteTo(&drawn); err != nil {
		return "" // bytes.Buffer does not fail
	}
	body := drawn.String()
	body = body[strings.Index(body, "<svg"):]
	body = body[strings.Index(body, ">")+1:]
	body = strings.ReplaceAll(body, "font-family:Liberation Sans;", "font-family:"+fontStack+";")
	body = strings.ReplaceAll(body, "font-variant:normal;font-weight:normal;font-style:normal;", "")
	size := fmt.Sprintf(`width="%gpt" height="%gpt" `, f.width.Points(), f.height.Points())
	prolog := `<?xml version="1.0" encoding="UTF-8"?>` + "\n"
	if id != "" {
		size, prolog = `class="plot" `, ""
	} else {
		id = "plot"
	}
	return prolog + fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" %sviewBox="0 0 %g %g" role="img" aria-labelledby="%s-name %s-says">`,
		size, f.width.Points(), f.height.Points(), id, id) +
		fmt.Sprintf("\n<title id=\"%s-name\">%s</title>\n<desc id=\"%s-says\">%s</desc>", id, xmlText(c.name), id, xmlText(c.says)) +
		body
}

func xmlText(text string) string {
	var b strings.Builder
	_ = xml.EscapeText(&b, []byte(text)) // a strings.Builder does not fail
	return b.String()
}
