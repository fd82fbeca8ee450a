package main

import (
	"bufio"
	"context"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"

	"tautramp/acquire"
)

// artefacts is where screenshots go: a folder of the tester's choice, or one
// that goes with the test.
func artefacts(t *testing.T) string {
	t.Helper()
	if dir := os.Getenv("TAUTRAMP_ARTEFACTS"); dir != "" {
		if err := os.MkdirAll(dir, 0o755); err != nil {
			t.Fatal(err)
		}
		return dir
	}
	return t.TempDir()
}

// browser is one tab of a Chromium without a window.
type browser struct {
	t   *testing.T
	ctx context.Context
	dir string
}

// openBrowser starts Chromium; where there is none the test is skipped, and
// fails in the strict run.
func openBrowser(t *testing.T, width, height int64) *browser {
	t.Helper()
	if testing.Short() {
		t.Skip("the full run has it")
	}
	path, err := exec.LookPath("chromium")
	if err != nil {
		if os.Getenv("TAUTRAMP_STRICT") == "1" {
			t.Fatalf("no Chromium: %v", err)
		}
		t.Skipf("no Chromium: %v", err)
	}
	flags := append(chromedp.DefaultExecAllocatorOptions[:],
		chromedp.ExecPath(path), chromedp.UserDataDir(t.TempDir()), chromedp.NoSandbox, chromedp.DisableGPU,
		chromedp.WindowSize(int(width), int(height)),
		chromedp.Flag("disable-quic", true), chromedp.Flag("disable-component-update", true), chromedp.Flag("autoplay-policy", "no-user-gesture-required"))
	allocator, stopAllocator := chromedp.NewExecAllocator(context.Background(), flags...) // it outlives the test by its cleanup
	ctx, stop := chromedp.NewContext(allocator)
	b := &browser{t: t, ctx: ctx, dir: artefacts(t)}
	t.Cleanup(func() {
		if t.Failed() {
			b.shot("failed-" + strings.ReplaceAll(t.Name(), "/", "-"))
		}
		stop()
		stopAllocator()
	})
	// The first one starts the browser, and a limit of time would end it again.
	if err := chromedp.Do(ctx, chromedp.EmulateViewport(width, height)); err != nil {
		t.Fatal(err)
	}
	return b
}

// do takes steps, at most half a minute.
func (b *browser) do(what string, steps ...chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	ctx, stop := context.WithTimeout(b.ctx, 30*time.Second)
	defer stop()
	if err := chromedp.Do(ctx, steps...); err != nil {
		b.t.Fatalf("%s: %v", what, err)
	}
}

// ask is the value of a JavaScript expression; a promise is waited for.
func ask[T any](b *browser, expression string) T {
	b.t.Helper()
	ctx, stop := context.WithTimeout(b.ctx, 30*time.Second)
	defer stop()
	v, err := chromedp.Run(ctx, chromedp.Evaluate[T](expression, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatalf("%.200s: %.500v", expression, err)
	}
	return v
}

// shot keeps a picture of the screen.
func (b *browser) shot(name string) {
	b.t.Helper()
	ctx, stop := context.WithTimeout(b.ctx, 10*time.Second)
	defer stop()
	png, err := chromedp.Run(ctx, chromedp.CaptureScreenshot())
	if err != nil {
		b.t.Logf("no picture %s: %v", name, err)
		return
	}
	if err := os.WriteFile(filepath.Join(b.dir, name+".png"), png, 0o644); err != nil {
		b.t.Error(err)
	}
}

// wait waits until a JavaScript expression is true.
func (b *browser) wait(expression string, patience time.Duration) {
	b.t.Helper()
	for end := time.Now().Add(patience); !ask[bool](b, "Boolean("+expression+")"); time.Sleep(20 * time.Millisecond) {
		if time.Now().After(end) {
			b.shot("missed-" + strings.ReplaceAll(b.t.Name(), "/", "-"))
			b.t.Fatalf("%s did not come true; the screen says\n%s", expression, ask[string](b, "document.body.innerText"))
		}
	}
}

// text is what an element says.
func (b *browser) text(selector string) string {
	b.t.Helper()
	return strings.TrimSpace(ask[string](b, "document.querySelector("+quoteJS(selector)+")?.innerText ?? ''"))
}

func quoteJS(s string) string { return "`" + s + "`" }

// runHere runs a command line in this process until the test ends, and returns
// the first line that it prints.
func runHere(t testing.TB, args ...string) string {
	t.Helper()
	ctx, stop := context.WithCancel(context.Background())
	out, in := io.Pipe()
	ended := make(chan int, 1)
	go func() {
		ended <- run(ctx, args, env{stdout: in, stderr: &testLog{t: t, what: args[0]}, clock: acquire.NewClock, wall: time.Now})
		in.Close()
	}()
	t.Cleanup(func() {
		stop()
		select {
		case code := <-ended:
			if code != 0 {
				t.Errorf("%s: exit code %d", strings.Join(args, " "), code)
			}
		case <-time.After(10 * time.Second):
			t.Errorf("%s does not end", args[0])
		}
	})
	lines := bufio.NewScanner(out)
	if !lines.Scan() {
		t.Fatalf("%s says nothing", strings.Join(args, " "))
	}
	first := lines.Text()
	go io.Copy(io.Discard, out)
	return first
}

// testLog is a stderr that shows in the test's log.
type testLog struct {
	t    testing.TB
	what string
}

func (l *testLog) Write(p []byte) (int, error) {
	if testing.Verbose() {
		l.t.Logf("%s: %s", l.what, strings.TrimRight(string(p), "\n"))
	}
	return len(p), nil
}
