package page

import (
	"crypto/rand"
	"crypto/subtle"
	"encoding/hex"
	"net"
	"net/http"
	"net/url"
	"strings"
)

// Access says who may use the page. The zero value: this computer alone.
type Access struct {
	// Token opens the page to other computers: a browser shows it once, in the
	// address that was printed, and gets a cookie for it. "" lets in only
	// requests that name this computer's loopback address.
	Token string
	// Names are the host names, beside addresses in figures, by which other
	// computers may call this one.
	Names []string
}

// NewToken is a token that nobody guesses.
func NewToken() string {
	var b [16]byte
	rand.Read(b[:]) // never fails: see crypto/rand
	return hex.EncodeToString(b[:])
}

const (
	keyParameter = "key"
	keyCookie    = "tautramp-key"
)

// policy forbids everything that does not come from the page itself, and
// anything written into it.
const policy = "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self'; connect-src 'self'; frame-src 'self'; " +
	"base-uri 'none'; form-action 'none'; frame-ancestors 'self'"

// gate lets requests in or turns them away.
type gate struct{ access Access }

// admits reports whether a request goes on; if not, it has been answered.
func (g gate) admits(w http.ResponseWriter, r *http.Request) bool {
	h := w.Header()
	h.Set("Content-Security-Policy", policy)
	h.Set("X-Content-Type-Options", "nosniff")
	h.Set("Referrer-Policy", "no-referrer")
	h.Set("Cross-Origin-Resource-Policy", "same-origin")
	h.Set("Cross-Origin-Opener-Policy", "same-origin")
	h.Set("Cache-Control", "no-store")
	switch {
	case !g.hostFits(r.Host):
		http.Error(w, "this page is not at that address", http.StatusMisdirectedRequest)
	case foreign(r):
		http.Error(w, "another site may not use this page", http.StatusForbidden)
	case g.access.Token == "" || g.hasCookie(r):
		return true
	case r.Method == http.MethodGet && r.URL.Path == "/" && g.isToken(r.URL.Query().Get(keyParameter)):
		http.SetCookie(w, &http.Cookie{Name: keyCookie, Value: g.access.Token, Path: "/", HttpOnly: true, SameSite: http.SameSiteStrictMode})
		http.Redirect(w, r, "/", http.StatusSeeOther)
	default:
		http.Error(w, "open the address that the program printed, with its key", http.StatusUnauthorized)
	}
	return false
}

func (g gate) hasCookie(r *http.Request) bool {
	c, err := r.Cookie(keyCookie)
	return err == nil && g.isToken(c.Value)
}

func (g gate) isToken(text string) bool {
	return subtle.ConstantTimeCompare([]byte(text), []byte(g.access.Token)) == 1
}

// hostFits checks the name by which the browser called this computer. A name
// that somebody else can point at it (DNS rebinding) is refused; an address in
// figures cannot be pointed anywhere.
func (g gate) hostFits(hostPort string) bool {
	host := hostPort
	if h, _, err := net.SplitHostPort(hostPort); err == nil {
		host = h
	}
	host = strings.ToLower(strings.Trim(host, "[]"))
	if ip := net.ParseIP(host); ip != nil {
		return ip.IsLoopback() || g.access.Token != ""
	}
	if host == "localhost" {
		return true
	}
	for _, name := range g.access.Names {
		if g.access.Token != "" && host == strings.ToLower(name) {
			return true
		}
	}
	return false
}

// foreign reports that another site asks. What changes something must say that
// it comes from this page.
func foreign(r *http.Request) bool {
	site, origin := r.Header.Get("Sec-Fetch-Site"), r.Header.Get("Origin")
	if origin != "" && !sameOrigin(origin, r.Host) {
		return true
	}
	if r.Method == http.MethodGet || r.Method == http.MethodHead {
		visited := r.Header.Get("Sec-Fetch-Mode") == "navigate" && r.URL.Path == "/"
		return !visited && (site == "cross-site" || site == "same-site")
	}
	return origin == "" && site != "same-origin"
}

func sameOrigin(origin, host string) bool {
	u, err := url.Parse(origin)
	return err == nil && u.Scheme == "http" && u.Host == host && u.Path == ""
}
