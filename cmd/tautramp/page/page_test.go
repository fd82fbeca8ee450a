package page

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"io"
	"io/fs"
	"net/http"
	"net/http/httptest"
	"strings"
	"sync"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/visit"
)

// fake is a program around the page: what it saved, and a visit that runs until
// it is told to end.
type fake struct {
	mu     sync.Mutex
	saved  []byte
	bells  int
	orders []Order
	events []recording.Event
	show   chan func(visit.Status)
}

func (f *fake) deps() Deps {
	f.show = make(chan func(visit.Status), 1)
	return Deps{
		Program: "test",
		Mill: func() ([]byte, error) {
			f.mu.Lock()
			defer f.mu.Unlock()
			if f.saved == nil {
				return nil, fs.ErrNotExist
			}
			return f.saved, nil
		},
		SaveMill: func(text []byte) error {
			f.mu.Lock()
			defer f.mu.Unlock()
			f.saved = text
			return nil
		},
		Ports: func() ([]Port, error) { return []Port{{Path: "/dev/<b>port</b>"}}, nil },
		Visit: f.visit,
		Open: func(r io.Reader) (Papers, error) {
			text, err := io.ReadAll(r)
			if err != nil {
				return Papers{}, err
			}
			if !bytes.HasPrefix(text, []byte("tautramp")) {
				return Papers{}, errors.New("not a recording")
			}
			return papers("<script>alert(1)</script>\n"), nil
		},
		Bell: func() {
			f.mu.Lock()
			defer f.mu.Unlock()
			f.bells++
		},
	}
}

func (f *fake) visit(ctx context.Context, o Order) (Papers, error) {
	f.mu.Lock()
	f.orders = append(f.orders, o)
	f.mu.Unlock()
	f.show <- o.Show
	for {
		select {
		case e := <-o.Said:
			f.mu.Lock()
			f.events = append(f.events, e)
			f.mu.Unlock()
		case <-ctx.Done():
			return papers("T-1.ramp"), nil
		}
	}
}

func (f *fake) heard(t *testing.T, n int) []recording.Event {
	t.Helper()
	for end := time.Now().Add(5 * time.Second); ; time.Sleep(time.Millisecond) {
		f.mu.Lock()
		got := append([]recording.Event(nil), f.events...)
		f.mu.Unlock()
		if len(got) >= n {
			return got
		}
		if time.Now().After(end) {
			t.Fatalf("%d events of %d: %v", len(got), n, got)
		}
	}
}

func papers(name string) Papers {
	return Papers{Name: name, Seal: "5ea1",
		Figures: func(w io.Writer) error { _, err := io.WriteString(w, "{}"); return err },
		Sheet: func(w io.Writer, s mill.System) error {
			_, err := io.WriteString(w, "<style>p { color: red }</style><p>"+string(s))
			return err
		}}
}

// served is a page under test and how a browser on the same computer asks it.
type served struct {
	t *testing.T
	*Server
	*fake
}

func serve(t *testing.T, access Access) *served {
	t.Helper()
	ctx, stop := context.WithCancel(t.Context())
	f := &fake{}
	deps := f.deps()
	deps.Access = access
	s := &served{t, New(ctx, deps), f}
	t.Cleanup(func() { stop(); s.Wait() })
	return s
}

const host = "127.0.0.1:7463"

// ask sends a request as the page's own script does; header pairs replace what
// it sends.
func (s *served) ask(method, path, body string, header ...string) *httptest.ResponseRecorder {
	s.t.Helper()
	r := httptest.NewRequest(method, path, strings.NewReader(body))
	r.Host = host
	r.Header.Set("Sec-Fetch-Site", "same-origin")
	if method == http.MethodPost {
		r.Header.Set("Origin", "http://"+host)
		r.Header.Set("Content-Type", "application/json")
	}
	for i := 0; i < len(header); i += 2 {
		switch {
		case header[i] == "Host":
			r.Host = header[i+1]
		case header[i+1] == "":
			r.Header.Del(header[i])
		default:
			r.Header.Set(header[i], header[i+1])
		}
	}
	w := httptest.NewRecorder()
	s.ServeHTTP(w, r)
	return w
}

func (s *served) want(code int, w *httptest.ResponseRecorder) string {
	s.t.Helper()
	if w.Code != code {
		s.t.Errorf("status %d, want %d: %s", w.Code, code, w.Body)
	}
	return w.Body.String()
}

const order = `{"kind":"ramps","tensioner":"T-1","band":"QW-6","ports":["p"],"exercise":1,"ramps":3,"vent":true,"continues":"","confirmed":["locked\nout","not confirmed: air"]}`

func (s *served) begin() func(visit.Status) {
	s.t.Helper()
	s.want(http.StatusAccepted, s.ask("POST", "/start", order))
	return <-s.show
}

func TestAVisitFromStartToPapers(t *testing.T) {
	s := serve(t, Access{})
	s.begin()
	s.want(http.StatusConflict, s.ask("POST", "/start", order))
	for _, d := range []string{"mark", "undo", "slack", "vent", "turn", "abort"} {
		s.want(http.StatusNoContent, s.ask("POST", "/do", `{"deed":"`+d+`","text":"so"}`))
	}
	s.want(http.StatusBadRequest, s.ask("POST", "/do", `{"deed":"gave-up"}`))
	events := s.heard(t, 8)
	for i, want := range []recording.Event{{Kind: recording.Confirmed, Text: "locked out"}, {Kind: recording.Confirmed, Text: "not confirmed: air"},
		{Kind: recording.Mark, Text: "so"}, {Kind: recording.Undo, Text: "so"}, {Kind: recording.ZeroMark, Text: "so"},
		{Kind: recording.Vented, Text: "so"}, {Kind: recording.LowerTurn, Text: "so"}, {Kind: recording.Abort, Text: "so"}} {
		if events[i] != want {
			t.Errorf("event %d: %v, want %v", i, events[i], want)
		}
	}
	s.want(http.StatusNoContent, s.ask("POST", "/do", `{"deed":"bell"}`))
	s.want(http.StatusNoContent, s.ask("POST", "/do", `{"deed":"end"}`))
	s.Wait()
	s.want(http.StatusConflict, s.ask("POST", "/do", `{"deed":"mark"}`))
	if got := s.want(http.StatusOK, s.ask("GET", "/papers/1/sheet?units=si", "")); !strings.HasSuffix(got, "<p>si") {
		t.Errorf("sheet %q", got)
	}
	s.want(http.StatusNotFound, s.ask("GET", "/papers/1/plot", ""))
	s.want(http.StatusNotFound, s.ask("GET", "/papers/2/sheet", ""))
	if s.bells != 1 || s.orders[0].Plan != (recording.Plan{Exercise: 1, Ramps: 3}) {
		t.Errorf("%d bells, order %+v", s.bells, s.orders[0])
	}
}

func TestAnOrderThatGoesOnNamesTheSeal(t *testing.T) {
	s := serve(t, Access{})
	s.begin()
	s.ask("POST", "/do", `{"deed":"end"}`)
	s.Wait()
	s.want(http.StatusBadRequest, s.ask("POST", "/start", strings.Replace(order, `"continues":""`, `"continues":"7"`, 1)))
	s.want(http.StatusAccepted, s.ask("POST", "/start", strings.NewReplacer(`"continues":""`, `"continues":"1"`, `"ramps",`, `"verify",`).Replace(order)))
	<-s.show
	if o := s.orders[1]; o.Before.Seal != "5ea1" || o.Kind != Verify {
		t.Errorf("%+v", o)
	}
}

func TestOrdersThatCannotBe(t *testing.T) {
	s := serve(t, Access{})
	for from, to := range map[string]string{`"ramps",`: `"demolition",`, `["p"]`: `[]`, `["p"],`: `["p","p"],`, `:3`: `:51`, `:1,`: `:-1,`, `{`: `{"shell":"rm",`} {
		s.want(http.StatusBadRequest, s.ask("POST", "/start", strings.Replace(order, from, to, 1)))
	}
	if len(s.orders) != 0 {
		t.Errorf("orders %v", s.orders)
	}
}

func TestMillIsCheckedBeforeItIsKept(t *testing.T) {
	s := serve(t, Access{})
	var v millView
	parse := func(text string) {
		t.Helper()
		v = millView{}
		if err := json.Unmarshal([]byte(text), &v); err != nil {
			t.Fatalf("%v in %s", err, text)
		}
	}
	parse(s.want(http.StatusOK, s.ask("GET", "/mill", "")))
	if v.Exists || len(v.Example) == 0 {
		t.Errorf("an empty folder gives %+v", v)
	}
	good := v.Example
	for i, e := range good["band"].([]any) {
		if i == 1 {
			e.(map[string]any)["net_width"] = "44"
		}
	}
	delete(good["tensioner"].([]any)[0].(map[string]any), "setting_limit")
	body, _ := json.Marshal(good)
	parse(s.want(http.StatusOK, s.ask("POST", "/mill", string(body))))
	paths := map[string]bool{}
	for _, f := range v.Faults {
		paths[f.Path] = true
	}
	if v.Exists || s.saved != nil || !paths["band.1.net_width"] || !paths["tensioner.0.setting_limit"] {
		t.Errorf("faults %+v, saved %s", v.Faults, s.saved)
	}
	good["band"].([]any)[1].(map[string]any)["net_width"] = "1.73 in"
	good["tensioner"].([]any)[0].(map[string]any)["setting_limit"] = "950 psi"
	body, _ = json.Marshal(good)
	parse(s.want(http.StatusOK, s.ask("POST", "/mill", string(body))))
	if p, err := mill.Parse(s.saved); !v.Exists || err != nil || p.Tensioners[0].SettingLimit.Entered != "950 psi" {
		t.Errorf("%+v, %v: %s", v.Faults, err, s.saved)
	}
	parse(s.want(http.StatusOK, s.ask("GET", "/mill", "")))
	if !v.Exists || len(v.Faults) != 0 {
		t.Errorf("read again: %+v", v)
	}
}

func TestARecordingIsOpenedByItsBytes(t *testing.T) {
	s := serve(t, Access{})
	open := func(body string) *httptest.ResponseRecorder {
		return s.ask("POST", "/open", body, "Content-Type", "application/octet-stream")
	}
	if got := s.want(http.StatusOK, open("tautramp recording 1\n")); got != `{"id":"1"}` {
		t.Errorf("%q", got)
	}
	s.want(http.StatusUnprocessableEntity, open("GIF89a"))
	s.want(http.StatusUnsupportedMediaType, s.ask("POST", "/open", "tautramp"))
}

func TestLateBrowserGetsTheTrail(t *testing.T) {
	s := serve(t, Access{})
	s.saved = mill.Example()
	show := s.begin()
	for i := range 1000 {
		show(visit.Status{SettingSI: float64(i) * 5000, StressPa: float64(i) * 9000, Cycle: 1 + i/500})
	}
	show(visit.Status{SettingSI: 1, StressPa: nan(), Cycle: 2})
	var got trail
	if err := json.Unmarshal([]byte(s.want(http.StatusOK, s.ask("GET", "/trail", ""))), &got); err != nil {
		t.Fatal(err)
	}
	// A limit of 950 psi is 6.55 MPa; a point each 0.3 % of it, 19.65 kPa: each fourth.
	if len(got.Cycles) != 2 || len(got.Cycles[0].Points) != 125 || got.Cycles[1].Points[0] != [2]number{2.5e6, 4.5e6} {
		t.Errorf("%d cycles, %d points", len(got.Cycles), len(got.Cycles[0].Points))
	}
}

func nan() float64 { return float64(unknown()) }
