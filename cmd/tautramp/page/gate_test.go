package page

import (
	"io"
	"net/http"
	"net/http/httptest"
	"strconv"
	"strings"
	"testing"

	"tautramp/acquire/mill"
)

func TestOnlyThisComputerByItsOwnNames(t *testing.T) {
	s := serve(t, Access{})
	for name, code := range map[string]int{
		host: 200, "localhost:7463": 200, "[::1]:7463": 200, "127.0.0.1": 200,
		"evil.example:7463":         421, // a name that somebody points at 127.0.0.1
		"127.0.0.1.nip.example":     421,
		"192.168.1.20:7463":         421,
		"":                          421,
		"localhost.evil.example:80": 421,
	} {
		s.want(code, s.ask("GET", "/", "", "Host", name))
	}
}

func TestOtherSitesMayDoNothing(t *testing.T) {
	s := serve(t, Access{})
	mark := `{"deed":"bell"}`
	s.want(http.StatusNoContent, s.ask("POST", "/do", mark))
	for name, header := range map[string][]string{
		"a form of another site":        {"Origin", "http://evil.example", "Sec-Fetch-Site", "cross-site"},
		"a page without a name":         {"Origin", "null", "Sec-Fetch-Site", "cross-site"},
		"another port of this computer": {"Origin", "http://127.0.0.1:9999", "Sec-Fetch-Site", "same-site"},
		"https of the same name":        {"Origin", "https://" + host},
		"nobody who says who he is":     {"Origin", "", "Sec-Fetch-Site", ""},
		"an old browser, other site":    {"Origin", "", "Referer", "http://evil.example/", "Sec-Fetch-Site", ""},
	} {
		t.Run(name, func(t *testing.T) { s.want(http.StatusForbidden, s.ask("POST", "/do", mark, header...)) })
	}
	if s.bells != 1 {
		t.Errorf("%d bells", s.bells)
	}
	// Reading from a script of another site, or drawing into it.
	s.want(http.StatusForbidden, s.ask("GET", "/trail", "", "Sec-Fetch-Site", "cross-site", "Sec-Fetch-Mode", "no-cors"))
	s.want(http.StatusForbidden, s.ask("GET", "/live", "", "Origin", "http://evil.example"))
	// A link that leads here is all right.
	s.want(http.StatusOK, s.ask("GET", "/", "", "Sec-Fetch-Site", "cross-site", "Sec-Fetch-Mode", "navigate"))
	// A form can send these three types from anywhere: none is taken.
	for _, kind := range []string{"text/plain", "application/x-www-form-urlencoded", "multipart/form-data; boundary=x"} {
		s.want(http.StatusUnsupportedMediaType, s.ask("POST", "/do", mark, "Content-Type", kind))
		s.want(http.StatusUnsupportedMediaType, s.ask("POST", "/open", mark, "Content-Type", kind))
	}
}

func TestOtherComputersNeedTheKey(t *testing.T) {
	token := NewToken()
	if len(token) != 32 || token == NewToken() {
		t.Fatalf("token %q", token)
	}
	s := serve(t, Access{Token: token, Names: []string{"Filing-Room"}})
	ask := func(path string, header ...string) *httptest.ResponseRecorder {
		return s.ask("GET", path, "", append([]string{"Host", "192.168.1.20:7463"}, header...)...)
	}
	s.want(http.StatusUnauthorized, ask("/"))
	s.want(http.StatusUnauthorized, ask("/?key="+strings.Repeat("0", 32)))
	s.want(http.StatusUnauthorized, ask("/?key="))
	s.want(http.StatusUnauthorized, ask("/trail?key="+token))
	s.want(http.StatusUnauthorized, ask("/trail", "Cookie", keyCookie+"="))
	w := ask("/?key=" + token)
	s.want(http.StatusSeeOther, w)
	c := w.Result().Cookies()
	if len(c) != 1 || !c[0].HttpOnly || c[0].SameSite != http.SameSiteStrictMode || w.Header().Get("Location") != "/" {
		t.Fatalf("cookies %v, location %q", c, w.Header().Get("Location"))
	}
	cookie := c[0].Name + "=" + c[0].Value
	s.want(http.StatusOK, ask("/trail", "Cookie", cookie))
	s.want(http.StatusOK, ask("/trail", "Cookie", cookie, "Host", "filing-room:7463"))
	s.want(http.StatusMisdirectedRequest, ask("/trail", "Cookie", cookie, "Host", "evil.example:7463"))
	s.want(http.StatusForbidden, s.ask("POST", "/do", `{"deed":"bell"}`, "Host", "192.168.1.20:7463", "Cookie", cookie, "Origin", "http://evil.example"))
}

func TestNothingButThePageMayRun(t *testing.T) {
	s := serve(t, Access{})
	w := s.ask("GET", "/", "")
	for _, must := range []string{"default-src 'none'", "script-src 'self';", "style-src 'self';", "frame-ancestors 'self'", "form-action 'none'"} {
		if csp := w.Header().Get("Content-Security-Policy"); !strings.Contains(csp, must) || strings.Contains(csp, "unsafe") {
			t.Errorf("policy %q lacks %q", csp, must)
		}
	}
	body := w.Body.String()
	for _, inline := range []string{" style=", " onclick=", "<script>", "<style", "javascript:", "http://", "https://"} {
		if strings.Contains(body, inline) {
			t.Errorf("page.html holds %q", inline)
		}
	}
	s.begin()
	s.ask("POST", "/do", `{"deed":"end"}`)
	s.Wait()
	// SHA-256 of "p { color: red }", by openssl.
	want := "style-src 'sha256-" + styleSum + "'; style-src-attr"
	if csp := s.ask("GET", "/papers/1/sheet", "").Header().Get("Content-Security-Policy"); !strings.Contains(csp, want) || !strings.HasPrefix(csp, "default-src 'none'") {
		t.Errorf("policy of a sheet %q, want %q", csp, want)
	}
}

func TestNoAddressIsAPath(t *testing.T) {
	s := serve(t, Access{})
	for _, path := range []string{"/../page.go", "/assets/page.html", "/page.html", "/%2e%2e/%2e%2e/etc/passwd", "/papers/..%2f..%2fmill.toml/sheet", "/papers/0/sheet", "/papers/-1/sheet", "/mill.toml", "//etc/passwd"} {
		if w := s.ask("GET", path, ""); w.Code == http.StatusOK {
			t.Errorf("%s: status %d\n%s", path, w.Code, w.Body)
		}
	}
}

func TestBodiesAreBounded(t *testing.T) {
	s := serve(t, Access{})
	long := `{"deed":"` + strings.Repeat("x", mostJSON) + `"}`
	s.want(http.StatusRequestEntityTooLarge, s.ask("POST", "/do", long))
	s.want(http.StatusRequestEntityTooLarge, s.ask("POST", "/mill", `{"mill":"`+strings.Repeat("x", mostJSON)+`"}`))
	endless := httptest.NewRequest("POST", "/open", zeros{})
	endless.Host = host
	endless.Header.Set("Origin", "http://"+host)
	endless.Header.Set("Content-Type", "application/octet-stream")
	w := httptest.NewRecorder()
	if testing.Short() {
		return
	}
	s.ServeHTTP(w, endless)
	s.want(http.StatusRequestEntityTooLarge, w)
}

// zeros is a body without an end.
type zeros struct{}

func (zeros) Read(p []byte) (int, error) { clear(p); return len(p), nil }

func TestTextFromOutsideIsEscapedAndOneLine(t *testing.T) {
	s := serve(t, Access{})
	for _, body := range []string{s.ask("GET", "/ports", "").Body.String(), s.ask("POST", "/open", "tautramp", "Content-Type", "application/octet-stream").Body.String(), string(s.hub.newest[deskTopic].text)} {
		if strings.ContainsAny(body, "<>\n") {
			t.Errorf("%q", body)
		}
	}
	if got := cleaned("a\x00b\r\ne - 1 stopped \xff" + strings.Repeat("y", 300)); strings.ContainsAny(got, "\x00\r\n") || len([]rune(got)) > 200 {
		t.Errorf("%q", got)
	}
	// No script of the page makes HTML out of text.
	for _, name := range []string{"main", "ramp", "forms", "before", "result", "home", "alarm", "loop", "open", "line", "store", "units", "switch", "sound", "drawings", "screens"} {
		body := s.want(http.StatusOK, s.ask("GET", "/"+name+".js", ""))
		for _, way := range []string{"innerHTML", "outerHTML", "insertAdjacentHTML", "document.write", "eval(", "new Function"} {
			if strings.Contains(body, way) {
				t.Errorf("%s.js uses %s", name, way)
			}
		}
	}
}

const styleSum = "ngewhhP73WDIbgwseeu52VAAJgKdGUsu1IUQQsAm8m4="

func TestCardOnlyAfterOneCheckAndWithTheRigOff(t *testing.T) {
	s := serve(t, Access{})
	var wishes []CardWish
	s.Server.deps.Card = func(w io.Writer, of Papers, wish CardWish, _ mill.System) error {
		wishes = append(wishes, wish)
		_, err := io.WriteString(w, "<p>card of "+of.Name)
		return err
	}
	file := func(k Kind, of string, rigOff bool) string {
		p := papers(string(k) + ".ramp")
		if k != Ramps {
			p.Seal = "other"
		}
		p.RigOff = rigOff
		s.desk.mu.Lock()
		defer s.desk.mu.Unlock()
		s.desk.keep(filed{p, k, of})
		return strconv.Itoa(len(s.desk.papers))
	}
	main := file(Ramps, "", false)
	for what, proof := range map[string]string{
		"no check":               "",
		"a check of another one": file(Verify, "elsewhere", true),
		"another face":           file(Face, "5ea1", true),
		"the rig still on":       file(Verify, "5ea1", false),
	} {
		if got := s.want(http.StatusConflict, s.ask("GET", "/papers/"+main+"/card?from=below&proof="+proof, "")); !strings.Contains(got, "no card yet") {
			t.Errorf("%s: %q", what, got)
		}
	}
	good := file(Verify, "5ea1", true)
	s.want(http.StatusOK, s.ask("GET", "/papers/"+main+"/card?from=below&hold=locked&band=A&band=B&same=yes&proof="+good, ""))
	if len(wishes) != 1 || wishes[0].From != "below" || wishes[0].Hold != "locked" || len(wishes[0].Bands) != 2 || !wishes[0].SameWheel || wishes[0].Proof.Name != "verify.ramp" {
		t.Errorf("%+v", wishes)
	}
}

func TestBrowserStartsNothingWhereOneVisitIsShown(t *testing.T) {
	s := serve(t, Access{})
	s.Server.deps.OneVisit = true
	s.want(http.StatusBadRequest, s.ask("POST", "/start", order))
}
