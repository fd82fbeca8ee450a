package report

import (
	"bytes"
	"context"
	"encoding/json"
	"html"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// chromium is the browser, or the reason to skip; with TAUTRAMP_STRICT=1 a
// missing one is a failure.
func chromium(t *testing.T) string {
	t.Helper()
	if testing.Short() {
		t.Skip("a short run: nothing is drawn on paper")
	}
	browser, err := exec.LookPath("chromium")
	switch {
	case err != nil && os.Getenv("TAUTRAMP_STRICT") == "1":
		t.Fatal("no chromium at hand")
	case err != nil:
		t.Skip("no chromium at hand: nothing is drawn on paper")
	}
	return browser
}

// measure tells of every text whether it is cut off or crosses another, and of
// every picture whether it is empty and does not say why. Lines of one paragraph touch by design: a
// text's box is that of its own lines, less a pixel.
const measure = `<script>
const found = [], boxes = [];
const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
const sheet = document.querySelector('main').getBoundingClientRect();
while (walker.nextNode()) {
  const node = walker.currentNode, words = node.data.trim();
  if (!words || node.parentElement.closest('script, style')) continue;
  const range = document.createRange();
  range.selectNodeContents(node);
  for (const r of range.getClientRects()) {
    if (r.width < 1 || r.height < 1) continue;
    if (r.left < sheet.left - 1 || r.right > sheet.right + 1 || r.bottom > sheet.bottom + 1) found.push('off the sheet: ' + words.slice(0, 40));
    const slim = node.parentElement.closest('svg') ? 3 : r.height * 0.28; // the letters, not the line's leading
    boxes.push({node, words, l: r.left + 1, r: r.right - 1, t: r.top + slim, b: r.bottom - slim});
  }
  const p = node.parentElement;
  if (!p.closest('svg') && p.scrollWidth > p.clientWidth + 1 && getComputedStyle(p).overflow !== 'visible') found.push('cut off: ' + words.slice(0, 40));
}
for (let i = 0; i < boxes.length; i++) for (let k = i + 1; k < boxes.length; k++) {
  const a = boxes[i], b = boxes[k];
  if (a.node !== b.node && a.l < b.r && b.l < a.r && a.t < b.b && b.t < a.b) found.push('crosses: ' + a.words.slice(0, 40) + ' | ' + b.words.slice(0, 40));
}
for (const svg of document.querySelectorAll('svg.plot')) if (svg.querySelectorAll('path').length < 5 && !svg.textContent.includes('Nothing to draw')) found.push('an empty plot');
const pre = document.createElement('pre');
pre.id = 'found';
pre.textContent = JSON.stringify({texts: boxes.length, found});
document.body.append(pre);
</script></body>`

// onPaper lays a page out as it prints, in a window as wide as the paper less its
// margins, and returns what was found wrong and how many texts there are.
func onPaper(t *testing.T, browser, page string, widthPx int) (wrong []string, texts int) {
	t.Helper()
	page = strings.ReplaceAll(page, "@media print", "@media all")
	page = strings.Replace(page, "</body>", measure, 1)
	page = strings.Replace(page, "<body>", `<body style="width:`+strconv.Itoa(widthPx)+`px">`, 1)
	dir := t.TempDir()
	in := filepath.Join(dir, "page.html")
	if err := os.WriteFile(in, []byte(page), 0o600); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithTimeout(t.Context(), time.Minute)
	defer cancel()
	cmd := exec.CommandContext(ctx, browser, "--headless", "--no-sandbox", "--disable-gpu", "--window-size=1200,1600",
		"--user-data-dir="+filepath.Join(dir, "profile"), "--dump-dom", "file://"+in)
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("chromium lays nothing out: %v", err)
	}
	m := regexp.MustCompile(`(?s)<pre id="found">(.*?)</pre>`).FindSubmatch(out)
	if m == nil {
		t.Fatal("the page was not measured")
	}
	var said struct {
		Texts int
		Found []string
	}
	if err := json.Unmarshal([]byte(html.UnescapeString(string(m[1]))), &said); err != nil {
		t.Fatal(err)
	}
	return said.Found, said.Texts
}

// Widths are at 96 pixels an inch: A4 and Letter less the sheet's margins of 9
// mm, A5 across less 5 mm.
func TestNoTextIsCutOffOrCrossesAnother(t *testing.T) {
	browser := chromium(t)
	m := t1Meta()
	m.ClockFactor = 60
	card := func(o CardOrder) string {
		var b bytes.Buffer
		if err := Card(&b, t1(t), m, o, mill.US); err != nil {
			t.Fatal(err)
		}
		return b.String()
	}
	for _, c := range []struct {
		name, page string
		widthPx    int
	}{
		{"sheet, A4", htmlOf(t, t1(t), m, mill.SI), 725},
		{"sheet, Letter", htmlOf(t, t1(t), m, mill.US), 748},
		{"sheet without a zero", htmlOf(t, withoutZero(t), m, mill.US), 748},
		{"card from below", card(CardOrder{Direction: analyze.Rising}), 755},
		{"card from above", card(CardOrder{Direction: analyze.Falling}), 755},
		{"card of all bands", card(CardOrder{Direction: analyze.Rising, SameWheel: true, Others: []*analyze.Result{bandOnFile(t, t1(t), "QM-2"), bandOnFile(t, t1(t), "QN-17")}}), 725},
	} {
		wrong, texts := onPaper(t, browser, c.page, c.widthPx)
		if texts < 30 {
			t.Errorf("%s: only %d texts were seen", c.name, texts)
		}
		for _, w := range wrong {
			t.Errorf("%s: %s", c.name, w)
		}
	}
}

// The measurement itself sees what it is for.
func TestCrossingTextIsSeen(t *testing.T) {
	browser := chromium(t)
	wrong, _ := onPaper(t, browser, `<html><body><main style="width:200px"><p style="position:absolute;top:9px">one text</p><p style="position:absolute;top:9px">and another</p>
<svg class="plot"></svg></main></body></html>`, 700)
	if all := strings.Join(wrong, "\n"); !strings.Contains(all, "crosses: one text") || !strings.Contains(all, "an empty plot") {
		t.Errorf("found %q", all)
	}
}
