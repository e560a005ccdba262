package look

import (
	"crypto/rand"
	"crypto/subtle"
	"net/http"
	"strings"
	"sync"
)

// guard decides which requests are served.
type guard struct {
	host    string // address of the server, "127.0.0.1:8123"
	cookie  string // name of the cookie; cookies know no ports, so it names ours
	session string // what the cookie holds
	secret  string // what a request that marks must carry in the header secretHeader

	mu    sync.Mutex
	token string // opens the page once; empty once it has
}

const (
	tokenKey     = "token" // of the query in the first address
	secretHeader = "Strandwise-Secret"
)

func newGuard(host string) *guard {
	_, port, _ := strings.Cut(host, ":")
	return &guard{host: host, cookie: "strandwise-look-" + port, session: rand.Text(), secret: rand.Text(), token: rand.Text()}
}

// address returns the address that opens the page once.
func (g *guard) address() string {
	g.mu.Lock()
	defer g.mu.Unlock()
	return "http://" + g.host + "/?" + tokenKey + "=" + g.token
}

// What is said to those who are refused.
const (
	sayStranger = "This page opens by the address that 'strandwise look' printed, and each address opens it once, in one browser. " +
		"End 'strandwise look' with Ctrl-C and start it again for a new one; no mark is lost."
	sayHost   = "This page is served at http://127.0.0.1 only, under the port that 'strandwise look' printed."
	sayOrigin = "Pages from elsewhere may not ask for anything here."
	sayPath   = "There is no such page."
	saySecret = "Marks are taken from the page itself only; load it again."
	sayMethod = "This page is asked by GET, and takes marks by POST."
)

// wrap returns a handler that serves what the guard lets through.
func (g *guard) wrap(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		setHeaders(w.Header())
		if status, say := g.refuses(r); status != 0 {
			refuse(w, status, say)
			return
		}
		if r.Method == http.MethodGet && r.URL.Path == "/" && r.URL.Query().Has(tokenKey) {
			g.exchange(w, r)
			return
		}
		if !g.knows(r) {
			refuse(w, http.StatusForbidden, sayStranger)
			return
		}
		if r.Method == http.MethodPost && !equal(r.Header.Get(secretHeader), g.secret) {
			refuse(w, http.StatusForbidden, saySecret)
			return
		}
		next.ServeHTTP(w, r)
	})
}

// refuses returns the status and the words with which a request is refused that
// nobody may make, 0 for one that the right person may.
func (g *guard) refuses(r *http.Request) (status int, say string) {
	if r.Host != g.host {
		return http.StatusMisdirectedRequest, sayHost
	}
	if origin, sent := r.Header["Origin"]; sent && (len(origin) != 1 || origin[0] != "http://"+g.host) {
		return http.StatusForbidden, sayOrigin
	}
	// Another port of this machine is the same site, but not the same origin.
	if site := r.Header.Get("Sec-Fetch-Site"); site != "" && site != "same-origin" && site != "none" {
		return http.StatusForbidden, sayOrigin
	}
	if r.Method != http.MethodGet && r.Method != http.MethodHead && r.Method != http.MethodPost {
		return http.StatusMethodNotAllowed, sayMethod
	}
	if r.URL.RawPath != "" || strings.Contains(r.URL.Path, "..") || strings.Contains(r.URL.Path, "//") || strings.ContainsAny(r.URL.Path, "\\\x00") {
		return http.StatusBadRequest, sayPath
	}
	return 0, ""
}

// exchange gives a cookie for the token, once, and leads to the page under an
// address without it.
func (g *guard) exchange(w http.ResponseWriter, r *http.Request) {
	if !g.spend(r.URL.Query().Get(tokenKey)) && !g.knows(r) {
		refuse(w, http.StatusForbidden, sayStranger)
		return
	}
	http.SetCookie(w, &http.Cookie{Name: g.cookie, Value: g.session, Path: "/", HttpOnly: true, SameSite: http.SameSiteStrictMode})
	http.Redirect(w, r, "/", http.StatusSeeOther)
}

// spend tells whether the token is the right one, which it is once.
func (g *guard) spend(token string) bool {
	g.mu.Lock()
	defer g.mu.Unlock()
	if g.token == "" || !equal(token, g.token) {
		return false
	}
	g.token = ""
	return true
}

// knows tells whether a request carries the cookie.
func (g *guard) knows(r *http.Request) bool {
	cookies := r.CookiesNamed(g.cookie)
	return len(cookies) == 1 && equal(cookies[0].Value, g.session)
}

// equal compares in a time that does not depend on where texts differ.
func equal(a, b string) bool { return subtle.ConstantTimeCompare([]byte(a), []byte(b)) == 1 }

// setHeaders sets what every answer says to the browser.
func setHeaders(h http.Header) {
	h.Set("Content-Security-Policy", "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self'; connect-src 'self'; "+
		"base-uri 'none'; form-action 'none'; frame-ancestors 'none'")
	h.Set("X-Content-Type-Options", "nosniff")
	h.Set("X-Frame-Options", "DENY")
	h.Set("Referrer-Policy", "no-referrer")
	h.Set("Cross-Origin-Opener-Policy", "same-origin")
	h.Set("Cross-Origin-Resource-Policy", "same-origin")
	h.Set("Cache-Control", "no-store")
}

// refuse answers with words alone.
func refuse(w http.ResponseWriter, status int, say string) {
	w.Header().Set("Content-Type", "text/plain; charset=utf-8")
	w.WriteHeader(status)
	_, _ = w.Write([]byte(say + "\n")) // a reader who went away is no fault
}
