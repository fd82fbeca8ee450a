package main

import (
	"bytes"
	"context"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"tautramp/acquire"
	"tautramp/acquire/mill"
	"tautramp/acquire/port"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
)

const browserSpeed = "60"

// openPage shows the page of an empty folder.
func openPage(t *testing.T, width, height int64, ports ...string) *browser {
	t.Helper()
	b := openBrowser(t, width, height)
	args := []string{"page", "--no-open", "--listen", "127.0.0.1:0", "--speed", browserSpeed}
	for _, p := range ports {
		args = append(args, "--port", p)
	}
	address := strings.TrimPrefix(runHere(t, args...), "page: ")
	b.do("open the page", chromedp.Navigate(address))
	b.wait("document.querySelector('.ways')", 10*time.Second)
	ask[bool](b, `(() => { window.broken = []; document.addEventListener("securitypolicyviolation", (e) => broken.push(e.violatedDirective + " " + e.blockedURI));
		window.addEventListener("error", (e) => broken.push(e.message)); window.addEventListener("unhandledrejection", (e) => broken.push(String(e.reason))); return true; })()`)
	t.Cleanup(b.unbroken)
	return b
}

// unbroken wants that the page kept its own policy and no script failed so far.
func (b *browser) unbroken() {
	if broken := ask[[]string](b, "window.broken || []"); len(broken) > 0 {
		b.t.Errorf("the page broke its own policy, or a script failed: %v", broken)
	}
}

// TestProgramThatGoesAwayAndComesBack ends the program under an open page, and
// starts it again.
func TestProgramThatGoesAwayAndComesBack(t *testing.T) {
	t.Chdir(t.TempDir())
	b := openBrowser(t, 360, 740)
	free, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	address := free.Addr().String()
	free.Close()
	start := func() *exec.Cmd {
		program := exec.Command("tautramp", "page", "--no-open", "--listen", address)
		if err := program.Start(); err != nil {
			t.Fatal(err)
		}
		t.Cleanup(func() { _ = program.Process.Kill(); _ = program.Wait() }) // it may have ended
		for end := time.Now().Add(10 * time.Second); ; time.Sleep(10 * time.Millisecond) {
			if conn, err := net.Dial("tcp", address); err == nil {
				conn.Close()
				return program
			}
			if time.Now().After(end) {
				t.Fatal("the program does not come up")
			}
		}
	}
	program := start()
	b.do("open the page", chromedp.Navigate("http://"+address+"/"))
	b.wait("document.querySelector('.ways') && document.querySelector('#away').hidden", 10*time.Second)
	if err := program.Process.Signal(os.Interrupt); err != nil {
		t.Fatal(err)
	}
	if err := program.Wait(); err != nil {
		t.Errorf("the program ends with %v", err)
	}
	b.wait(shows("#away", "does not answer"), 10*time.Second)
	b.shot("away")
	start()
	b.wait("document.querySelector('#away').hidden", 15*time.Second)
}

// T-1 with QW-6 of the invented mill, as its mechanic writes it down.
func demoMill() [][2]string {
	return [][2]string{
		{"#mill-name", "Quillfern Mill"}, {"#tensioner-0-name", "T-1"}, {"#tensioner-0-setting_limit", "950 psi"},
		{"#tensioner-0-cylinders", "2"}, {"#tensioner-0-bore", "2.5 in"},
		{"#band-0-name", "QW-6"}, {"#band-0-thickness", "0.058 in"}, {"#band-0-net_width", "5.25 in"}, {"#band-0-gross_width", "6.00 in"},
		{"#band-0-target", "9500 psi"}, {"#band-0-modulus", "29.0 Mpsi"}, {"#rig-gauge_length", "20.00 in"},
	}
}

func (b *browser) fill(fields [][2]string) {
	b.t.Helper()
	for _, f := range fields {
		b.do("type into "+f[0], chromedp.ScrollIntoView(f[0]), chromedp.SendKeys(f[0], f[1]))
	}
}

// retype types a text in the place of what a field holds.
func (b *browser) retype(field, text string) {
	b.t.Helper()
	ask[bool](b, "((f) => { f.focus(); f.select(); return true; })(document.querySelector(`"+field+"`))")
	b.do("retype "+field, chromedp.KeyEvent(text))
}

func (b *browser) click(selector string) {
	b.t.Helper()
	b.wait("document.querySelector(`"+selector+"`)", 5*time.Second)
	b.do("press "+selector, chromedp.ScrollIntoView(selector), chromedp.Click(selector))
}

func checks() []string {
	return []string{"#check-lock", "#check-energy", "#check-plane", "#check-band", "#check-tee", "#check-air", "#check-place", "#check-inputs"}
}

// shows is a condition: an element is there and holds a text.
func shows(selector, text string) string {
	return "(document.querySelector(`" + selector + "`)?.innerText ?? '').includes(`" + text + "`)"
}

// TestWholeJobInABrowser goes from an empty folder to the printed card, with a
// mouse, and has each screen checked for what keeps people out.
func TestWholeJobInABrowser(t *testing.T) {
	needTerminals(t)
	t.Chdir(t.TempDir())
	b := openPage(t, 1366, 768, "band-port", "check-port")
	runHere(t, "rig", "--link", "band-port", "--speed", browserSpeed)
	// One fresh approach to the number, and no more.
	runHere(t, "rig", "--link", "check-port", "--speed", browserSpeed, "--exercise", "0", "--ramps", "1", "--top", "723 psi", "--seed", "5")
	step := func(name string) { b.shot("job-" + name); b.accessible(name) }
	step("1-home")
	b.click("a[href='#mill']")
	b.wait("document.querySelector('#mill-name')", 5*time.Second)
	b.fill(demoMill())
	b.retype("#band-0-thickness", "1.47 in") // a slip: mm written as inches
	b.click("#save")
	b.wait(shows("#band-0-thickness-fault", "no band"), 5*time.Second)
	step("2-mill-slip")
	b.retype("#band-0-thickness", "0.058 in")
	b.click("#save")
	b.wait(shows("#saved", "Saved"), 5*time.Second)
	b.click("#measure")
	b.click("#onward")
	b.wait(shows("#hold-up", "Lock-out"), 5*time.Second)
	for _, c := range checks() {
		b.click(c)
	}
	step("3-before")
	b.click("#onward")
	b.wait("document.querySelector('input[value=band-port]')?.checked", 5*time.Second)
	b.click("input[value=check-port]")
	step("4-boards")
	b.click("#start")
	b.wait("!document.querySelector('#ramp').hidden && document.querySelector('#setting').innerText !== '--'", 10*time.Second)
	b.wait(shows("#facts", "loading"), 10*time.Second)
	step("5-ramp")
	b.click("#units")
	b.wait(shows("#settingUnit", "gauge bar"), time.Second)
	b.click("#units")
	b.wait("document.querySelector('#ramp').hidden && document.querySelector('.aim .big')", 40*time.Second)
	b.wantNear("724", "621")
	time.Sleep(500 * time.Millisecond)
	step("6-result")
	b.verify()
	b.printCard()
}

// wantNear wants T-1's settings, 724 and 621 gauge psi, within 5 (hand
// arithmetic from its planted friction).
func (b *browser) wantNear(rising, falling string) {
	b.t.Helper()
	for i, want := range []string{rising, falling} {
		off := ask[float64](b, "Math.abs(parseFloat(document.querySelectorAll('.aim .big')["+string(rune('0'+i))+"].innerText) - "+want+")")
		if !(off <= 5) {
			b.t.Errorf("number %d is %g off %s", i+1, off, want)
		}
	}
}

// verify checks the number once, on the other port, and takes the rig off.
func (b *browser) verify() {
	b.t.Helper()
	b.click("#verify")
	b.click("#onward")
	b.wait("document.querySelector('input[value=band-port]')?.checked", 5*time.Second)
	b.click("input[value=band-port]")
	b.click("input[value=check-port]")
	b.click("#start")
	b.wait(shows("#bigWord", "rig is off"), 40*time.Second)
	b.do("foot switch", chromedp.KeyEvent(" "))
	b.wait("document.querySelector('#ramp').hidden", 20*time.Second)
	b.wait(shows(".big.word", "AGREES"), 10*time.Second)
	b.shot("job-7-verified")
}

func (b *browser) printCard() {
	b.t.Helper()
	b.click("a[href='#home']")
	b.click("a[data-kind=ramps]")
	b.click("#to-card")
	b.click("input[value=maintained]")
	b.accessible("card")
	b.click("#print-card")
	b.wait("document.querySelector('#open-card')", 10*time.Second)
	time.Sleep(300 * time.Millisecond)
	b.shot("job-8-card")
	address := ask[string](b, "document.querySelector('#open-card').href")
	b.unbroken()
	b.do("open the card", chromedp.Navigate(address))
	if text := b.text("body"); !strings.Contains(text, "72") || !strings.Contains(strings.ToLower(text), "from below") {
		b.t.Errorf("the card says\n%s", text)
	}
	ctx, stop := context.WithTimeout(b.ctx, 20*time.Second)
	defer stop()
	pdf, err := chromedp.Run(ctx, chromedp.PrintToPDF())
	if err != nil {
		b.t.Fatal(err)
	}
	if n := bytes.Count(pdf, []byte("/Type /Page\n")); n != 1 {
		b.t.Errorf("the card prints on %d sheets", n)
	}
	if err := os.WriteFile(filepath.Join(b.dir, "job-9-card.pdf"), pdf, 0o644); err != nil {
		b.t.Fatal(err)
	}
}

// accessible has axe-core look at the screen, where the tester brings it.
func (b *browser) accessible(where string) {
	b.t.Helper()
	path := os.Getenv("TAUTRAMP_AXE")
	if path == "" {
		if os.Getenv("TAUTRAMP_STRICT") == "1" {
			b.t.Fatal("TAUTRAMP_AXE does not name axe.min.js of axe-core")
		}
		return
	}
	code, err := os.ReadFile(path)
	if err != nil {
		b.t.Fatal(err)
	}
	if !ask[bool](b, "Boolean(window.axe)") {
		ask[bool](b, string(code)+"; true")
	}
	for _, fault := range ask[[]string](b, `axe.run(document, {resultTypes: ["violations"]}).then((r) => r.violations
		.filter((v) => v.impact === "serious" || v.impact === "critical")
		.map((v) => v.id + ": " + v.nodes.map((n) => n.target + " " + n.failureSummary).join(" | ")))`) {
		b.t.Errorf("%s: %s", where, fault)
	}
}

// tabTo presses Tab until an element has the focus.
func (b *browser) tabTo(selector string) {
	b.t.Helper()
	for range 120 {
		if ask[bool](b, "Boolean(document.activeElement && document.activeElement.matches(`"+selector+"`))") {
			return
		}
		b.do("Tab", chromedp.KeyEvent(kb.Tab))
	}
	b.t.Fatalf("Tab never comes to %s; it is at %s", selector, ask[string](b, "document.activeElement.outerHTML.slice(0, 200)"))
}

// TestWholeJobOnAPhoneByKeysAlone does the job at 360 x 740 without a pointer.
func TestWholeJobOnAPhoneByKeysAlone(t *testing.T) {
	needTerminals(t)
	t.Chdir(t.TempDir())
	b := openPage(t, 360, 740, "band-port")
	runHere(t, "rig", "--link", "band-port", "--speed", browserSpeed)
	key := func(selector, key string) { b.tabTo(selector); b.do(key, chromedp.KeyEvent(key)) }
	key("a[href='#mill']", kb.Enter)
	b.wait("document.querySelector('#mill-name')", 5*time.Second)
	for _, f := range demoMill() {
		key(f[0], f[1])
	}
	b.do("Enter saves", chromedp.KeyEvent(kb.Enter))
	b.wait(shows("#saved", "Saved"), 5*time.Second)
	b.shot("keys-1-mill")
	key("#measure", kb.Enter)
	b.wait("document.querySelector('#check-lock')", 5*time.Second)
	for _, c := range checks() {
		key(c, " ")
	}
	b.shot("keys-2-before")
	key("#onward", kb.Enter)
	b.wait("document.querySelector('input[value=band-port]')?.checked", 5*time.Second)
	key("#ramps", kb.Backspace)
	b.do("one ramp", chromedp.KeyEvent("1"))
	key("#start", kb.Enter)
	b.wait(shows("#facts", "loading"), 20*time.Second)
	b.do("space bar", chromedp.KeyEvent(" "))
	b.wait(shows("#said", "mark"), 5*time.Second)
	wide := ask[bool](b, "document.documentElement.scrollWidth > 360")
	b.shot("keys-3-ramp")
	b.wait("document.querySelector('#ramp').hidden && document.querySelector('.aim .big')", 40*time.Second)
	b.wantNear("724", "621")
	b.shot("keys-4-result")
	if wide || ask[bool](b, "document.documentElement.scrollWidth > 360") {
		t.Error("a phone would have to scroll sideways")
	}
	events := 0
	for _, e := range readOnly(t).Entries {
		if e.Event != nil && e.Event.Kind == recording.Confirmed {
			events++
		}
	}
	if events < len(checks()) {
		t.Errorf("%d confirmations in the recording, want %d and more", events, len(checks()))
	}
}

// readOnly reads the only recording of the folder.
func readOnly(t *testing.T) *recording.Recording {
	t.Helper()
	names, err := filepath.Glob("*.ramp")
	if err != nil || len(names) != 1 {
		t.Fatalf("recordings %v, %v", names, err)
	}
	rec, err := recording.ReadFile(names[0])
	if err != nil {
		t.Fatal(err)
	}
	return rec
}

// plugged is a rig whose cable can be pulled.
type plugged struct {
	t     *testing.T
	rig   *simrig.Rig
	clock acquire.Clock
	pair  *port.Pair
	ended chan struct{}
}

func (p *plugged) plug() {
	p.t.Helper()
	pair, err := port.NewPair()
	if err != nil {
		p.t.Fatal(err)
	}
	os.Remove("band-port") // of the last time
	if err := os.Symlink(pair.Path, "band-port"); err != nil {
		p.t.Fatal(err)
	}
	p.pair, p.ended = pair, make(chan struct{})
	go func(ended chan struct{}) {
		defer close(ended)
		_ = p.rig.Boards()[0].Serve(p.t.Context(), pair, p.clock) // ends with the cable
	}(p.ended)
}

func (p *plugged) pull() {
	p.t.Helper()
	if err := p.pair.Unplug(); err != nil {
		p.t.Error(err)
	}
	<-p.ended
}

// TestCablePulledMidRampInABrowser pulls the cable while the setting rises, sees
// that the page says so and shows nothing old, and plugs it in again.
func TestCablePulledMidRampInABrowser(t *testing.T) {
	needTerminals(t)
	t.Chdir(t.TempDir())
	if err := os.WriteFile("mill.toml", mill.Example(), 0o644); err != nil {
		t.Fatal(err)
	}
	b := openPage(t, 1024, 700, "band-port")
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Seed: 8,
		Drive: simrig.Drive{Ramps: 3, Repeat: true}, Boards: []simrig.BoardSpec{{QueueBytes: 60 << 18}}})
	if err != nil {
		t.Fatal(err)
	}
	p := &plugged{t: t, rig: rig, clock: acquire.NewClock(60)}
	p.plug()
	b.click("a[href='#before']")
	for _, c := range checks() {
		b.click(c)
	}
	b.click("#onward")
	b.wait("document.querySelector('input[value=band-port]')?.checked", 5*time.Second)
	b.click("#start")
	b.wait("/cycle 2 of 4\\s+loading/.test(document.querySelector('#facts').innerText)", 30*time.Second)
	p.pull()
	b.wait(shows("#facts", "board 1 lost")+"&&"+shows("#setting", "--"), 10*time.Second)
	b.shot("cable-1-pulled")
	if next := b.text("#next"); !strings.Contains(strings.ToLower(next), "board is away") && !b.stopped() {
		t.Errorf("the page says %q", next)
	}
	p.plug()
	b.wait("document.querySelector('#setting').innerText !== '--'", 20*time.Second)
	b.shot("cable-2-back")
	b.wait("document.querySelector('#ramp').hidden && document.querySelector('.aim .big')", 60*time.Second)
	b.wantNear("724", "621")
}

// stopped reports that the alarm fills the screen.
func (b *browser) stopped() bool {
	return ask[bool](b, "!document.querySelector('#alarm').hidden")
}

// cutOff is true where a part of the alarm is not on the screen, or its shape
// and its words cross.
const cutOff = `[...document.querySelectorAll("#alarm *")].some((e) => { const r = e.getBoundingClientRect(); return r.right > innerWidth + 1 || r.bottom > innerHeight + 1 || r.top < -1 || r.left < -1; })
	|| (([a, b]) => a.right > b.left + 1 && a.bottom > b.top + 1)([".stop-shape", ".alarm-words"].map((s) => document.querySelector(s).getBoundingClientRect()))`

// TestAlarmFillsTheScreen has a limit that the rehearsal's ramp passes.
func TestAlarmFillsTheScreen(t *testing.T) {
	needTerminals(t)
	t.Chdir(t.TempDir())
	low := bytes.Replace(mill.Example(), []byte(`setting_limit = "950 psi"`), []byte(`setting_limit = "300 psi"`), 1)
	if err := os.WriteFile("mill.toml", low, 0o644); err != nil {
		t.Fatal(err)
	}
	b := openPage(t, 360, 740, "band-port")
	runHere(t, "rig", "--link", "band-port", "--speed", browserSpeed)
	ask[string](b, `fetch("/start", {method: "POST", headers: {"Content-Type": "application/json"}, body: JSON.stringify({kind: "ramps", tensioner: "T-1", band: "QW-6", ports: ["band-port"], exercise: 1, ramps: 1})}).then((r) => r.text())`)
	b.wait("!document.querySelector('#alarm').hidden && document.activeElement.id === 'alarm'", 20*time.Second)
	b.shot("alarm-phone")
	words := b.text("#alarm")
	for _, must := range []string{"STOP", "release the pressure slowly", "limit 300 gauge psi"} {
		if !strings.Contains(words, must) {
			t.Errorf("the alarm says\n%s", words)
		}
	}
	// The shape, the words and a way out of it all stand on the screen.
	if ask[bool](b, cutOff) {
		t.Error("the alarm is cut off")
	}
	b.accessible("alarm")
	b.wait("document.querySelector('#alarm').hidden", 30*time.Second) // the rig lets the pressure down
	// The check before a ramp shows the same, at a laptop's size.
	b.do("laptop", chromedp.EmulateViewport(1366, 768))
	ask[bool](b, "import('/alarm.js').then((m) => { m.check(); return true; })")
	b.shot("alarm-check-laptop")
	if ask[bool](b, cutOff) {
		t.Error("the check is cut off")
	}
}

// TestBenchTestInABrowser starts a test of a dial; the simulated operator works
// the switch.
func TestBenchTestInABrowser(t *testing.T) {
	needTerminals(t)
	t.Chdir(t.TempDir())
	if err := os.WriteFile("mill.toml", append(mill.Example(), shopInstruments...), 0o644); err != nil {
		t.Fatal(err)
	}
	b := openPage(t, 1366, 768, "switch-port")
	runHere(t, "rig", "--mill", "mill.toml", "--bench", "dial", "--instrument", "shop dial", "--gauge-fault", "loop 6 psi", "--link", "switch-port", "--speed", browserSpeed)
	b.click("a[href='#bench']")
	b.wait("document.querySelector('input[value=switch-port]')?.checked", 5*time.Second)
	b.do("choose", chromedp.SetValue("#bench-plan", "dial"), chromedp.SetValue("#bench-tested", "shop dial"), chromedp.SetValue("#bench-reference", "bench reference"))
	ask[bool](b, "['plan','tested','reference'].forEach((k) => document.querySelector('#bench-' + k).dispatchEvent(new Event('change'))) || true")
	b.shot("bench-1-start")
	b.accessible("bench")
	b.click("#bench-start")
	b.wait("!document.querySelector('#station').hidden && "+shows("#benchNext", "ointer"), 20*time.Second)
	b.wait("parseInt(document.querySelector('#benchTaken').innerText) > 3", 30*time.Second)
	b.shot("bench-2-test")
	b.accessible("station")
	b.wait("!document.querySelector('#result').hidden && document.querySelector('.big.word')", 60*time.Second)
	time.Sleep(300 * time.Millisecond)
	b.shot("bench-3-result")
}
