package look

import (
	"context"
	"encoding/binary"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"strandwise/channels"
	"strandwise/export/marks"
)

// visitor is a browser that has opened the page.
type visitor struct {
	*testing.T
	server *Server
	cookie *http.Cookie
}

// visit opens the page of a server by its address.
func visit(t *testing.T, s *Server) *visitor {
	t.Helper()
	w := ask(s, request("GET", s.Address(), ""))
	cookies := w.Result().Cookies()
	if w.Code != http.StatusSeeOther || w.Header().Get("Location") != "/" || len(cookies) != 1 {
		t.Fatalf("the address gives status %d, %d cookies and leads to %q", w.Code, len(cookies), w.Header().Get("Location"))
	}
	return &visitor{t, s, cookies[0]}
}

func request(method, address, body string) *http.Request {
	r := httptest.NewRequest(method, address, strings.NewReader(body))
	r.Host = "127.0.0.1:8123"
	if body != "" {
		r.Header.Set("Content-Type", "application/json")
	}
	return r
}

func ask(s *Server, r *http.Request) *httptest.ResponseRecorder {
	w := httptest.NewRecorder()
	s.ServeHTTP(w, r)
	return w
}

// get asks for a page by the cookie.
func (v *visitor) get(path string) *httptest.ResponseRecorder {
	r := request("GET", path, "")
	r.AddCookie(v.cookie)
	return ask(v.server, r)
}

// post marks as the page does.
func (v *visitor) post(path, body string) *httptest.ResponseRecorder {
	r := request("POST", path, body)
	r.AddCookie(v.cookie)
	r.Header.Set("Origin", "http://127.0.0.1:8123")
	r.Header.Set(secretHeader, v.server.guard.secret)
	return ask(v.server, r)
}

// read decodes a JSON answer that must be a good one.
func read[A any](v *visitor, w *httptest.ResponseRecorder) A {
	v.Helper()
	var a A
	if w.Code != http.StatusOK {
		v.Fatalf("status %d: %s", w.Code, w.Body)
	}
	if err := json.Unmarshal(w.Body.Bytes(), &a); err != nil {
		v.Fatal(err)
	}
	return a
}

func invented(t *testing.T) *Server { return serve(t, write(t, small(), troupe(puppets(t), 6, 3, 25))) }

func TestWhoIsRefused(t *testing.T) {
	v := visit(t, invented(t))
	with := func(change func(*http.Request)) func(*http.Request) { return change }
	cookie := with(func(r *http.Request) { r.AddCookie(v.cookie) })
	right := with(func(r *http.Request) {
		r.AddCookie(v.cookie)
		r.Header.Set("Origin", "http://127.0.0.1:8123")
		r.Header.Set(secretHeader, v.server.guard.secret)
	})
	header := func(name, value string) func(*http.Request) {
		return func(r *http.Request) { right(r); r.Header.Set(name, value) }
	}
	host := func(name string) func(*http.Request) { return func(r *http.Request) { right(r); r.Host = name } }
	path := func(text string) func(*http.Request) { return func(r *http.Request) { right(r); r.URL.Path = text } }
	for _, tc := range []struct {
		name, method, path, body string
		as                       func(*http.Request)
		status                   int
	}{
		{"a page with the cookie", "GET", "/", "", cookie, 200},
		{"its files too", "GET", "/page.js", "", cookie, 200},
		{"HEAD", "HEAD", "/", "", cookie, 200},
		{"from the page itself", "GET", "/set", "", header("Sec-Fetch-Site", "same-origin"), 200},
		{"typed by the person", "GET", "/", "", header("Sec-Fetch-Site", "none"), 200},
		{"no cookie", "GET", "/", "", func(*http.Request) {}, 403},
		{"no cookie for a file", "GET", "/page.css", "", func(*http.Request) {}, 403},
		{"no cookie for the signals", "GET", "/motion?n=0", "", func(*http.Request) {}, 403},
		{"another cookie", "GET", "/set", "", func(r *http.Request) { r.AddCookie(&http.Cookie{Name: v.cookie.Name, Value: "x"}) }, 403},
		{"an empty cookie", "GET", "/set", "", func(r *http.Request) { r.AddCookie(&http.Cookie{Name: v.cookie.Name}) }, 403},
		{"two cookies", "GET", "/set", "", func(r *http.Request) { cookie(r); cookie(r) }, 403},
		{"a used token", "GET", "/?token=" + strings.Repeat("A", 26), "", func(*http.Request) {}, 403},
		{"an empty token", "GET", "/?token=", "", func(*http.Request) {}, 403},
		{"a foreign host", "GET", "/set", "", host("rebound.example:8123"), 421},
		{"localhost", "GET", "/set", "", host("localhost:8123"), 421},
		{"another port", "GET", "/set", "", host("127.0.0.1:8124"), 421},
		{"no host", "GET", "/set", "", host(""), 421},
		{"a foreign origin", "GET", "/set", "", header("Origin", "http://elsewhere.example"), 403},
		{"the origin of another port", "GET", "/set", "", header("Origin", "http://127.0.0.1:9"), 403},
		{"the origin null", "GET", "/set", "", header("Origin", "null"), 403},
		{"a foreign site", "GET", "/set", "", header("Sec-Fetch-Site", "cross-site"), 403},
		{"another port as a site", "GET", "/set", "", header("Sec-Fetch-Site", "same-site"), 403},
		{"dots in the path", "GET", "/", "", path("/../secret"), 400},
		{"dots between", "GET", "/", "", path("/take/../../set"), 400},
		{"dots escaped", "GET", "/%2e%2e/secret", "", right, 400},
		{"a slash escaped", "GET", "/take%2f..%2fset", "", right, 400},
		{"two slashes", "GET", "/", "", path("//take"), 400},
		{"a backslash", "GET", "/", "", path(`/..\secret`), 400},
		{"no such page", "GET", "/secret", "", right, 404},
		{"a file that is not of the page", "GET", "/page.go", "", right, 404},
		{"dots for an id", "GET", "/take?n=..", "", right, 400},
		{"a path for an id", "GET", "/motion?n=../../etc/passwd", "", right, 400},
		{"a text for an id", "GET", "/take?n=take+1", "", right, 400},
		{"an id beyond the last", "GET", "/take?n=1000", "", right, 400},
		{"an id below the first", "GET", "/motion?n=-1", "", right, 400},
		{"a huge id", "GET", "/take?n=99999999999999999999", "", right, 400},
		{"no id", "GET", "/take", "", right, 400},
		{"two ids", "GET", "/take?n=1&n=2", "", right, 400},
		{"an unknown key", "GET", "/set?x=1", "", right, 400},
		{"another method", "DELETE", "/mark", "", right, 405},
		{"a mark by GET", "GET", "/mark", "", right, 404},
		{"a mark without the cookie", "POST", "/mark", `{"n":0,"mark":"drop"}`, header("Cookie", ""), 403},
		{"a mark without the secret", "POST", "/mark", `{"n":0,"mark":"drop"}`, cookie, 403},
		{"a mark with another secret", "POST", "/mark", `{"n":0,"mark":"drop"}`, header(secretHeader, "guess"), 403},
		{"a mark from elsewhere", "POST", "/mark", `{"n":0,"mark":"drop"}`, header("Origin", "http://elsewhere.example"), 403},
		{"a mark in a form", "POST", "/mark", `{"n":0,"mark":"drop"}`, header("Content-Type", "text/plain"), 415},
		{"a mark that is none", "POST", "/mark", `{"n":0,"mark":"maybe"}`, right, 400},
		{"a mark of no take", "POST", "/mark", `{"mark":"drop"}`, right, 400},
		{"a mark beyond the last take", "POST", "/mark", `{"n":1000,"mark":"drop"}`, right, 400},
		{"a mark with more in it", "POST", "/mark", `{"n":0,"mark":"drop","path":"../x"}`, right, 400},
		{"a mark with a query", "POST", "/mark?n=1", `{"n":0,"mark":"drop"}`, right, 400},
		{"a long mark", "POST", "/mark", `{"n":0,"mark":"` + strings.Repeat("x", 2000) + `"}`, right, 400},
		{"nothing to take back", "POST", "/undo", `{}`, right, 409},
	} {
		t.Run(tc.name, func(t *testing.T) {
			r := request(tc.method, tc.path, tc.body)
			tc.as(r)
			w := ask(v.server, r)
			if w.Code != tc.status {
				t.Errorf("status %d, want %d: %s", w.Code, tc.status, w.Body)
			}
			if tc.status != 200 && len(strings.TrimSpace(w.Body.String())) < 20 {
				t.Errorf("it is said in no words: %q", w.Body)
			}
			checkHeaders(t, w)
		})
	}
	if all := v.server.log.All(); len(all) > 0 {
		t.Errorf("refused requests marked %v", all)
	}
}

// checkHeaders checks what every answer, good or bad, tells the browser.
func checkHeaders(t *testing.T, w *httptest.ResponseRecorder) {
	t.Helper()
	h := w.Header()
	for name, want := range map[string]string{
		"X-Content-Type-Options": "nosniff", "Referrer-Policy": "no-referrer", "X-Frame-Options": "DENY", "Cache-Control": "no-store",
	} {
		if h.Get(name) != want {
			t.Errorf("%s is %q, want %q", name, h.Get(name), want)
		}
	}
	policy := h.Get("Content-Security-Policy")
	for _, want := range []string{"default-src 'none'", "script-src 'self'", "style-src 'self'", "frame-ancestors 'none'", "base-uri 'none'"} {
		if !strings.Contains(policy, want+";") && !strings.HasSuffix(policy, want) {
			t.Errorf("the content security policy %q lacks %q", policy, want)
		}
	}
	if strings.Contains(policy, "unsafe") || h.Get("Access-Control-Allow-Origin") != "" {
		t.Errorf("the policy is %q, for others %q", policy, h.Get("Access-Control-Allow-Origin"))
	}
}

func TestTheTokenOpensOnce(t *testing.T) {
	s := invented(t)
	address := s.Address()
	if w := ask(s, request("HEAD", address, "")); w.Code != http.StatusForbidden {
		t.Errorf("HEAD, as a preview of links asks it, gives status %d", w.Code)
	}
	v := visit(t, s)
	if c := v.cookie; !c.HttpOnly || c.SameSite != http.SameSiteStrictMode || c.Path != "/" || c.Domain != "" || len(c.Value) < 26 {
		t.Errorf("the cookie is %v", c)
	}
	if w := ask(s, request("GET", address, "")); w.Code != http.StatusForbidden || !strings.Contains(w.Body.String(), "opens it once") {
		t.Errorf("the second time the address gives status %d: %s", w.Code, w.Body)
	}
	if w := ask(s, request("GET", s.Address(), "")); w.Code != http.StatusForbidden {
		t.Errorf("the token that is no more gives status %d", w.Code)
	}
	r := request("GET", address, "")
	r.AddCookie(v.cookie)
	if w := ask(s, r); w.Code != http.StatusSeeOther {
		t.Errorf("to the browser that opened it the address gives status %d", w.Code)
	}
	if other := serve(t, s.set.dir); other.Address() == address || other.guard.session == s.guard.session || other.guard.secret == s.guard.secret {
		t.Error("two servers share a secret")
	}
}

func TestMarking(t *testing.T) {
	v := visit(t, invented(t))
	id := v.server.set.takes.rows[2].id
	got := read[markAnswer](v, v.post("/mark", `{"n":2,"mark":"drop"}`))
	if want := (markAnswer{2, id, marks.Drop, marked{Drop: 1, Undo: 1}}); got != want {
		t.Errorf("the mark gives %+v, want %+v", got, want)
	}
	if m, err := marks.Read(v.server.set.dir); err != nil || m[id] != marks.Drop {
		t.Errorf("the file says %v, %v", m, err)
	}
	if list := read[takesList](v, v.get("/takes?mark=drop")); list.Total != 1 || list.Takes[0].ID != id || list.Takes[0].Mark != marks.Drop {
		t.Errorf("dropped takes: %+v", list)
	}
	got = read[markAnswer](v, v.post("/undo", `{}`))
	if want := (markAnswer{2, id, marks.None, marked{}}); got != want {
		t.Errorf("undo gives %+v, want %+v", got, want)
	}
}

// TestMarkThatCannotBeSaved: what is not on the disk does not count, and is said.
func TestMarkThatCannotBeSaved(t *testing.T) {
	v := visit(t, invented(t))
	if err := os.Mkdir(filepath.Join(v.server.set.dir, marks.Name), 0o777); err != nil {
		t.Fatal(err)
	}
	w := v.post("/mark", `{"n":2,"mark":"drop"}`)
	if w.Code != http.StatusInternalServerError || !strings.Contains(w.Body.String(), "error") {
		t.Errorf("status %d: %s", w.Code, w.Body)
	}
	if all := v.server.log.All(); len(all) > 0 {
		t.Errorf("yet it counts: %v", all)
	}
}

func TestWhatThePageIsTold(t *testing.T) {
	takes := troupe(puppets(t), 6, 3, 25)
	v := visit(t, serve(t, write(t, small(), takes)))
	set := read[aboutSet](v, v.get("/set"))
	if set.Takes != len(takes) || set.Recorded != 6 || set.Synthetic != 15 || len(set.Channels) != 7 || len(set.Groups) != 3 || set.Secret != v.server.guard.secret || len(set.Gates) != 2 {
		t.Errorf("the set is %+v", set)
	}
	list := read[takesList](v, v.get("/takes?from=20&count=5&gate=1"))
	if list.Total != len(takes) || list.From != 20 || len(list.Takes) != 1 {
		t.Errorf("the end of the list is %+v", list)
	}
	n := v.server.set.numberOf("take 1~2")
	take := read[aboutTake](v, v.get(fmt.Sprintf("/take?n=%d", n)))
	if take.SourceID != "take 1" || take.Source != v.server.set.numberOf("take 1") || take.Draw != 2 || take.Rank != 0 || take.Method != "recipe" ||
		len(take.Parameters) != 1 || len(take.Gates) != 2 || take.Gates[1].Name != "stray" || take.Step != 1 || take.Figure == nil {
		t.Errorf("the take is %+v", take)
	}
	checkMotion(t, v.get(fmt.Sprintf("/motion?n=%d", n)), takes[7])
}

// checkMotion holds the bytes of an answer against a take.
func checkMotion(t *testing.T, w *httptest.ResponseRecorder, want *channels.Take) {
	t.Helper()
	data, f := w.Body.Bytes(), want.Frames()
	if len(data) != 4*f*(1+want.Width()) {
		t.Fatalf("%d bytes for %d frames of %d channels", len(data), f, want.Width())
	}
	for i := range f {
		for c, v := range want.Frame(i) {
			if got := math.Float32frombits(binary.LittleEndian.Uint32(data[4*((c+1)*f+i):])); got != float32(v) {
				t.Fatalf("frame %d, channel %d is %v, want %v", i, c, got, v)
			}
		}
	}
}

// TestNamesStayText: whatever a name holds, it is sent as JSON that holds no tag.
func TestNamesStayText(t *testing.T) {
	takes := troupe(puppets(t), 3, 0, 25)
	names := []string{`</script><script>alert(1)</script>`, "\u202e\u2067\u200f'\"&\u2028", strings.Repeat("long ", 2000)}
	for i, name := range names {
		takes[i].ID, takes[i].Label, takes[i].Subject, takes[i].Session = name, name, name, name
	}
	v := visit(t, serve(t, write(t, small(), takes)))
	w := v.get("/takes")
	if strings.ContainsAny(w.Body.String(), "<>") || w.Header().Get("Content-Type") != "application/json" {
		t.Errorf("as %s: %.200s", w.Header().Get("Content-Type"), w.Body)
	}
	got := map[string]bool{}
	for _, take := range read[takesList](v, w).Takes {
		got[take.ID] = true
	}
	for _, name := range names {
		if !got[name] {
			t.Errorf("no take is named %.40q", name)
		}
	}
}

// TestServe serves on a real port until it is told to end.
func TestServe(t *testing.T) {
	dir := write(t, small(), troupe(puppets(t), 4, 2, 25))
	log, err := marks.Open(dir, "", time.Now)
	if err != nil {
		t.Fatal(err)
	}
	ctx, end := context.WithCancel(context.Background())
	defer end()
	address, done := make(chan string, 1), make(chan error, 1)
	set := open(t, dir)
	go func() {
		done <- Serve(ctx, set, log, 0, func(a string) error { address <- a; return nil })
	}()
	answer, err := http.DefaultTransport.RoundTrip(request1(t, <-address))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := io.Copy(io.Discard, answer.Body); err != nil || answer.StatusCode != http.StatusSeeOther {
		t.Errorf("status %d, error %v", answer.StatusCode, err)
	}
	answer.Body.Close()
	end()
	if err := <-done; err != nil {
		t.Errorf("it ended with %v", err)
	}
	if err := Serve(context.Background(), set, log, 0, func(string) error { return errors.New("nobody reads") }); err == nil || err.Error() != "nobody reads" {
		t.Errorf("an address that cannot be told gives %v", err)
	}
}

func request1(t *testing.T, address string) *http.Request {
	t.Helper()
	r, err := http.NewRequest("GET", address, nil)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// FuzzRequests asks anything, with and without the cookie: a stranger never gets
// an answer, and the visitor always an answer.
func FuzzRequests(f *testing.F) {
	dir := write(f, small(), troupe(puppets(f), 4, 2, 25))
	s := serve(f, dir)
	w := ask(s, request("GET", s.Address(), ""))
	cookie := w.Result().Cookies()[0]
	f.Add("GET", "/", "", "")
	f.Add("GET", "/take", "n=1", "")
	f.Add("GET", "/motion", "n=2&n=3", "")
	f.Add("GET", "/..%2f", "n=..", "")
	f.Add("POST", "/mark", "", `{"n":1,"mark":"keep"}`)
	f.Add("POST", "/undo", "", `{}`)
	f.Fuzz(func(t *testing.T, method, path, query, body string) {
		make := func() *http.Request {
			r := request("GET", "/", "")
			r.Method, r.URL.Path, r.URL.RawQuery = method, path, query
			r.Body = io.NopCloser(strings.NewReader(body))
			r.Header.Set("Content-Type", "application/json")
			r.Header.Set(secretHeader, s.guard.secret)
			return r
		}
		if w := ask(s, make()); w.Code < 400 {
			t.Errorf("a stranger gets status %d for %s %q?%q", w.Code, method, path, query)
		}
		r := make()
		r.AddCookie(cookie)
		if w := ask(s, r); w.Code >= 500 {
			t.Errorf("status %d for %s %q?%q %q: %s", w.Code, method, path, query, body, w.Body)
		}
	})
}
