package main

import (
	"context"
	"io"
	"net/http"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/cmd/tautramp/page"
)

func TestSavedMillKeepsTheOneThatWasThere(t *testing.T) {
	t.Chdir(t.TempDir())
	o := pageOptions{mill: "mill.toml"}
	e := env{wall: func() time.Time { return time.Date(2026, 9, 14, 8, 30, 0, 0, time.UTC) }}
	if err := o.saveMill([]byte("first"), e); err != nil {
		t.Fatal(err)
	}
	if names, _ := filepath.Glob("*"); len(names) != 1 {
		t.Errorf("after the first one: %v", names)
	}
	for range 2 { // the same again keeps nothing more
		if err := o.saveMill([]byte("second"), e); err != nil {
			t.Fatal(err)
		}
	}
	old, err := os.ReadFile("mill-until-20260914-083000.toml")
	now, _ := os.ReadFile("mill.toml")
	if err != nil || string(old) != "first" || string(now) != "second" {
		t.Errorf("kept %q (%v), now %q", old, err, now)
	}
}

// TestPageForOthersHasAKey serves on every address of this computer.
func TestPageForOthersHasAKey(t *testing.T) {
	t.Chdir(t.TempDir())
	first := strings.TrimPrefix(runHere(t, "page", "--no-open", "--listen", "0.0.0.0:0"), "page: ")
	address, key, ok := strings.Cut(first, "?key=")
	if !ok || len(key) != 32 {
		t.Fatalf("printed %q", first)
	}
	get := func(address string) int {
		t.Helper()
		r, err := http.Get(address)
		if err != nil {
			t.Fatal(err)
		}
		r.Body.Close()
		return r.StatusCode
	}
	if code := get(address); code != http.StatusUnauthorized {
		t.Errorf("without the key: %d", code)
	}
	// This client keeps no cookies: after the redirection it is a stranger again.
	if code := get(first); code != http.StatusUnauthorized {
		t.Errorf("with the key and no cookie: %d", code)
	}
	client := &http.Client{CheckRedirect: func(*http.Request, []*http.Request) error { return http.ErrUseLastResponse }}
	r, err := client.Get(first)
	if err != nil {
		t.Fatal(err)
	}
	r.Body.Close()
	if r.StatusCode != http.StatusSeeOther || len(r.Cookies()) != 1 {
		t.Errorf("with the key: %d, cookies %v", r.StatusCode, r.Cookies())
	}
}

func TestBrowserIsOpenedUnlessToldNot(t *testing.T) {
	t.Chdir(t.TempDir())
	for _, noOpen := range []bool{false, true} {
		var opened []string
		e := env{stdout: io.Discard, stderr: io.Discard, wall: time.Now, browse: func(a string) error { opened = append(opened, a); return nil }}
		f := serveFlags{listen: "127.0.0.1:0", noOpen: noOpen}
		o := pageOptions{mill: "mill.toml", system: mill.US}
		s, err := f.start(context.Background(), func(a page.Access) page.Deps { return o.deps(a, e) }, e)
		if err != nil {
			t.Fatal(err)
		}
		if err := s.close(); err != nil {
			t.Error(err)
		}
		if (len(opened) == 1) == noOpen || len(opened) == 1 && !strings.HasPrefix(opened[0], "http://127.0.0.1:") {
			t.Errorf("no-open %v: opened %v", noOpen, opened)
		}
	}
}
