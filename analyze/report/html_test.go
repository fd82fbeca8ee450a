package report

import (
	"bytes"
	"context"
	"encoding/xml"
	"errors"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

func htmlOf(t testing.TB, r *analyze.Result, m Meta, s mill.System) string {
	t.Helper()
	return string(written(t, func(b *bytes.Buffer) error { return HTML(b, r, m, s) }))
}

func TestPageNeedsNothingElse(t *testing.T) {
	out := htmlOf(t, t1(t), t1Meta(), mill.US)
	for _, bad := range []string{"<script", "<link", "<img", "<iframe", "url(", "@import", "src=", "href=", "onload", "ZgotmplZ"} {
		if strings.Contains(out, bad) {
			t.Errorf("the page holds %q", bad)
		}
	}
	outside := strings.ReplaceAll(out, `xmlns="http://www.w3.org/2000/svg"`, "")
	if at := regexp.MustCompile(`https?:|//[a-z]`).FindStringIndex(outside); at != nil {
		t.Errorf("the page points outside: %s", outside[at[0]:min(len(outside), at[0]+60)])
	}
	if n := strings.Count(out, "<svg "); n != 3 {
		t.Errorf("%d pictures, want 3", n)
	}
	if len(out) > 400_000 {
		t.Errorf("%d bytes", len(out))
	}
}

func TestPageSaysWhatMatters(t *testing.T) {
	m := t1Meta()
	m.ClockFactor = 60
	out := strings.ReplaceAll(joined(htmlOf(t, t1(t), m, mill.US)), "&#39;", "'")
	for _, want := range []string{
		"REHEARSAL", "Quillfern Mill", "Brindlewick Saw &amp; Mill Service", "T-1 with band QW-6", "Setting for <span>9,500 band psi",
		"this visit's curve", "next time you set it", "counting all doubt (use this for the card)", "come up to it from below", "come down to it from above", "Overshot while rising", "Never above <b>950 gauge psi</b>",
		"At round settings", "Friction", "<b>service</b>", "Running band, one-sided", "What this rests on", "modulus E", "Gauge length L", "back to gullet bottom",
		"Faces measured", "slack band", "Not checked", "Cautions", m.Seal, "Name and signature", "@page", "quillfern-t1.ramp, whole",
	} {
		if !strings.Contains(out, want) {
			t.Errorf("the page lacks %q", want)
		}
	}
}

func TestTextFromOutsideIsEscaped(t *testing.T) {
	r, m := hostile(t)
	out := htmlOf(t, r, m, mill.US)
	for _, bad := range []string{"<script", "alert(1)</script", "\x1b", "\u202E"} {
		if strings.Contains(out, bad) {
			t.Errorf("the page holds %q", bad)
		}
	}
	if !strings.Contains(out, "&lt;script&gt;alert(1)") {
		t.Error("the text itself is gone")
	}
	if len(out) > 500_000 {
		t.Errorf("%d bytes: text from outside is not bounded", len(out))
	}
}

// The page is written so that it is XML too: every element must be closed.
func TestElementsClose(t *testing.T) {
	evil, evilMeta := hostile(t)
	for name, out := range map[string]string{
		"T-1": htmlOf(t, t1(t), t1Meta(), mill.SI), "nothing": htmlOf(t, blank(mill.SetBySpring), Meta{}, mill.US), "hostile": htmlOf(t, evil, evilMeta, mill.US),
	} {
		dec := xml.NewDecoder(strings.NewReader(out))
		dec.Entity = xml.HTMLEntity
		ids := map[string]bool{}
		for {
			token, err := dec.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			start, ok := token.(xml.StartElement)
			if !ok {
				continue
			}
			for _, a := range start.Attr {
				if a.Name.Local == "id" && ids[a.Value] {
					t.Errorf("%s: two elements are called %q", name, a.Value)
				}
				ids[a.Value] = ids[a.Value] || a.Name.Local == "id"
			}
		}
	}
}

// Prints the sheet where a Chromium is at hand: on the two sides of one sheet of
// either paper.
func TestReportPrintsOnOneSheet(t *testing.T) {
	browser := chromium(t)
	m := t1Meta()
	m.ClockFactor = 60
	for paper, s := range map[string]mill.System{"A4": mill.SI, "Letter": mill.US} {
		out := strings.Replace(htmlOf(t, t1(t), m, s), "@page {", "@page { size: "+paper+";", 1)
		if n := printedPages(t, browser, out); n > 2 {
			t.Errorf("%s, %s: %d pages", paper, s, n)
		}
	}
}

func printedPages(t *testing.T, browser, page string) int {
	t.Helper()
	dir := t.TempDir()
	in, out := filepath.Join(dir, "sheet.html"), filepath.Join(dir, "sheet.pdf")
	if err := os.WriteFile(in, []byte(page), 0o600); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(t.Context(), time.Minute)
	defer cancel()
	cmd := exec.CommandContext(ctx, browser, "--headless", "--no-sandbox", "--disable-gpu", "--no-pdf-header-footer",
		"--user-data-dir="+filepath.Join(dir, "profile"), "--print-to-pdf="+out, "file://"+in)
	if text, err := cmd.CombinedOutput(); err != nil {
		t.Skipf("chromium does not print here: %v: %s", err, text)
	}
	pdf, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	return len(regexp.MustCompile(`/Type\s*/Page\b`).FindAll(pdf, -1))
}
