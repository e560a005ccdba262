package look

import (
	"context"
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"net"
	"net/http"
	"time"

	"strandwise/export/marks"
)

//go:embed page
var page embed.FS

// Server is the page of one set.
type Server struct {
	set     *Set
	log     *marks.Log
	guard   *guard
	handler http.Handler
}

// NewServer returns the page of a set, to be served at a host such as
// "127.0.0.1:8123" and under no other name. Marks are added to the log.
func NewServer(set *Set, log *marks.Log, host string) *Server {
	s := &Server{set: set, log: log, guard: newGuard(host)}
	files, err := fs.Sub(page, "page")
	if err != nil {
		panic("look: the page is not embedded")
	}
	mux := http.NewServeMux()
	for path, name := range pageFiles() {
		mux.HandleFunc("GET "+path, func(w http.ResponseWriter, r *http.Request) { http.ServeFileFS(w, r, files, name) })
	}
	mux.HandleFunc("GET /set", answer(s.aboutSet))
	mux.HandleFunc("GET /takes", answer(s.listTakes))
	mux.HandleFunc("GET /take", answer(s.aboutTake))
	mux.HandleFunc("GET /motion", s.sendMotion)
	mux.HandleFunc("POST /mark", answer(s.mark))
	mux.HandleFunc("POST /undo", answer(s.undo))
	mux.HandleFunc("/", func(w http.ResponseWriter, _ *http.Request) { refuse(w, http.StatusNotFound, sayPath) })
	s.handler = s.guard.wrap(mux)
	return s
}

// pageFiles are the files of the page, by path.
func pageFiles() map[string]string {
	out := map[string]string{"/{$}": "page.html"}
	for _, name := range []string{"page.css", "icon.svg", "page.js", "ask.js", "words.js", "list.js", "bench.js", "figure.js", "traces.js", "keys.js"} {
		out["/"+name] = name
	}
	return out
}

// Address returns the address that opens the page once, in one browser.
func (s *Server) Address() string { return s.guard.address() }

// ServeHTTP answers one request.
func (s *Server) ServeHTTP(w http.ResponseWriter, r *http.Request) { s.handler.ServeHTTP(w, r) }

// Serve serves the page of a set on 127.0.0.1 until the context ends, which is no
// error. Port 0 takes a free one. announce is told the address that opens the
// page once, when it can be opened; its failure ends the server.
func Serve(ctx context.Context, set *Set, log *marks.Log, port int, announce func(address string) error) error {
	listener, err := net.Listen("tcp4", fmt.Sprintf("127.0.0.1:%d", port))
	if err != nil {
		return fmt.Errorf("cannot listen: %w", err)
	}
	s := NewServer(set, log, listener.Addr().String())
	server := &http.Server{
		Handler:           s,
		ReadHeaderTimeout: 5 * time.Second,
		ReadTimeout:       10 * time.Second,
		WriteTimeout:      time.Minute,
		IdleTimeout:       2 * time.Minute,
		MaxHeaderBytes:    16 << 10,
	}
	done := make(chan error, 1)
	go func() { done <- server.Serve(listener) }()
	failed := announce(s.Address())
	if failed == nil {
		select {
		case err := <-done:
			return err
		case <-ctx.Done():
		}
	}
	// What is being answered is finished first; who holds on is cut off.
	last, stop := context.WithTimeout(context.WithoutCancel(ctx), 3*time.Second)
	defer stop()
	if server.Shutdown(last) != nil {
		failed = errors.Join(failed, server.Close())
	}
	if err := <-done; !errors.Is(err, http.ErrServerClosed) {
		failed = errors.Join(failed, err)
	}
	return failed
}
