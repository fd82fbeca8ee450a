package main

import (
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
)

// openPage runs a rig and a page in an empty folder, and shows the page.
func openPage(t *testing.T, speed string, width, height int64) *browser {
	t.Helper()
	b := openBrowser(t, width, height)
	t.Chdir(t.TempDir())
	runHere(t, "rig", "--link", "band-port", "--speed", speed)
	address := strings.TrimPrefix(runHere(t, "page", "--no-open", "--listen", "127.0.0.1:0", "--port", "band-port", "--speed", speed), "page: ")
	b.do("open the page", chromedp.Navigate(address))
	b.wait("document.querySelector('.ways')", 10*time.Second)
	return b
}

// fill types into fields of the forms.
func (b *browser) fill(fields [][2]string) {
	b.t.Helper()
	for _, f := range fields {
		b.do("type into "+f[0], chromedp.ScrollIntoView(f[0]), chromedp.SendKeys(f[0], f[1]))
	}
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

func (b *browser) click(selector string) {
	b.t.Helper()
	b.do("press "+selector, chromedp.ScrollIntoView(selector), chromedp.Click(selector))
}

// confirmAll ticks what must be so before the ramps.
func (b *browser) confirmAll() {
	b.t.Helper()
	b.wait("document.querySelector('#check-lock')", 5*time.Second)
	for _, id := range []string{"lock", "energy", "plane", "band", "tee", "air", "place", "inputs"} {
		b.click("#check-" + id)
	}
}

// TestWholeJobInABrowser goes from an empty folder to the result.
func TestWholeJobInABrowser(t *testing.T) {
	needTerminals(t)
	for _, screen := range []struct {
		name          string
		width, height int64
	}{{"laptop", 1366, 768}, {"phone", 360, 740}} {
		t.Run(screen.name, func(t *testing.T) {
			b := openPage(t, "60", screen.width, screen.height)
			shot := func(name string) { b.shot(screen.name + "-" + name) }
			shot("1-home")
			b.click("a[href='#mill']")
			b.wait("document.querySelector('#mill-name')", 5*time.Second)
			b.fill(demoMill())
			shot("2-mill")
			b.click("#save")
			b.wait("document.querySelector('#saved').innerText.startsWith('Saved')", 5*time.Second)
			shot("3-saved")
			b.click("#measure")
			b.confirmAll()
			shot("4-before")
			b.click("#onward")
			b.wait("document.querySelector('#start') && document.querySelector('input[value=band-port]')?.checked", 5*time.Second)
			shot("5-boards")
			b.click("#start")
			b.wait("!document.querySelector('#ramp').hidden && document.querySelector('#setting').innerText !== '--'", 10*time.Second)
			b.wait("document.querySelector('#facts').innerText.includes('loading')", 10*time.Second)
			shot("6-ramp")
			b.do("foot switch", chromedp.KeyEvent(" "))
			b.wait("document.querySelector('#said').innerText.includes('taken') || document.querySelector('#said').innerText.includes('noted')", 5*time.Second)
			b.wait("!document.querySelector('#result').hidden && document.querySelector('.aim .big')", 40*time.Second)
			time.Sleep(300 * time.Millisecond)
			shot("7-result")
			t.Log(b.text("#result .aims"))
		})
	}
}
