// Package browser_test opens the program's pages in a real browser.
//
//	cd .ci/browser && go test ./...                       # skips, and says so, without a browser
//	STRANDWISE_BROWSER=required go test ./...             # fails without one
//	STRANDWISE_PICTURES=/some/folder go test ./...        # keeps the pictures taken, to be looked at
package browser_test

import (
	"context"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// chromium returns the browser's path. Without one the test is skipped or, where
// a browser is required, fails.
func chromium(t *testing.T) string {
	t.Helper()
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome"} {
		if path, err := exec.LookPath(name); err == nil {
			return path
		}
	}
	if os.Getenv("STRANDWISE_BROWSER") == "required" {
		t.Fatal("no Chromium on the path, and STRANDWISE_BROWSER requires one: apt-get install chromium")
	}
	t.Skip("no Chromium on the path: the pages were not opened in a browser")
	return ""
}

// tab is a tab of a browser of its own, and what it complained of or asked for.
type tab struct {
	*testing.T
	context.Context

	mu        sync.Mutex
	complains []string // errors and warnings on the console, and exceptions
	asks      []string // addresses of all requests
}

// newTab opens a browser with one empty tab. Options are further ones of the
// browser.
func newTab(t *testing.T, options ...chromedp.ExecAllocatorOption) *tab {
	t.Helper()
	all := append(append([]chromedp.ExecAllocatorOption{}, chromedp.DefaultExecAllocatorOptions[:]...),
		chromedp.ExecPath(chromium(t)), chromedp.NoSandbox, chromedp.Flag("disable-dev-shm-usage", true))
	allocator, end := chromedp.NewExecAllocator(context.Background(), append(all, options...)...)
	t.Cleanup(end)
	ctx, stop := chromedp.NewContext(allocator)
	t.Cleanup(stop)
	b := &tab{T: t, Context: ctx}
	if err := chromedp.Listen(ctx, b.hear); err != nil {
		t.Fatal(err)
	}
	call(b, log.Enable, cdp.Empty{})
	call(b, network.Enable, network.EnableParams{})
	return b
}

func (b *tab) hear(event any) {
	b.mu.Lock()
	defer b.mu.Unlock()
	switch e := event.(type) {
	case *runtime.EventExceptionThrown:
		text := e.ExceptionDetails.Text
		if thrown := e.ExceptionDetails.Exception; thrown != nil {
			text += " " + thrown.Description
		}
		b.complains = append(b.complains, text)
	case *runtime.EventConsoleAPICalled:
		if e.Type == runtime.ConsoleAPICalledTypeError || e.Type == runtime.ConsoleAPICalledTypeWarning {
			var texts []string
			for _, a := range e.Args {
				texts = append(texts, string(a.Value)+a.Description)
			}
			b.complains = append(b.complains, strings.Join(texts, " "))
		}
	case *log.EventEntryAdded:
		if e.Entry.Level == log.EntryLevelError || e.Entry.Level == log.EntryLevelWarning {
			b.complains = append(b.complains, e.Entry.Text+" "+e.Entry.URL)
		}
	case *network.EventRequestWillBeSent:
		b.asks = append(b.asks, e.Request.URL)
	}
}

// complaints returns what the tab complained of since it was asked last.
func (b *tab) complaints() []string {
	b.mu.Lock()
	defer b.mu.Unlock()
	out := b.complains
	b.complains = nil
	return out
}

// checkQuiet fails when the tab complained.
func (b *tab) checkQuiet() {
	b.Helper()
	for _, text := range b.complaints() {
		b.Errorf("the console says: %s", text)
	}
}

// asked returns the addresses of all requests so far.
func (b *tab) asked() []string {
	b.mu.Lock()
	defer b.mu.Unlock()
	return append([]string{}, b.asks...)
}

// do carries out actions.
func (b *tab) do(actions ...chromedp.Action[chromedp.Void]) {
	b.Helper()
	ctx, stop := context.WithTimeout(b.Context, 2*time.Minute)
	defer stop()
	if err := chromedp.Do(ctx, actions...); err != nil {
		b.Fatal(err)
	}
}

// get carries out an action and returns what it gives.
func get[V any](b *tab, action chromedp.Action[V]) V {
	b.Helper()
	ctx, stop := context.WithTimeout(b.Context, 2*time.Minute)
	defer stop()
	v, err := chromedp.Run(ctx, action)
	if err != nil {
		b.Fatal(err)
	}
	return v
}

// call sends a command of the browser's protocol.
func call[P, R any](b *tab, command cdp.Command[P, R], parameters P) R {
	b.Helper()
	v, err := chromedp.Call(b.Context, command, parameters)
	if err != nil {
		b.Fatal(err)
	}
	return v
}

// eval returns what a script gives.
func eval[V any](b *tab, script string) V {
	b.Helper()
	return get(b, chromedp.Evaluate[V](script, chromedp.EvalAwaitPromise))
}

// script runs a script that gives nothing.
func (b *tab) script(text string) {
	b.Helper()
	b.do(chromedp.Evaluate[chromedp.Void](text))
}

// until waits until a script gives true.
func (b *tab) until(what, script string) {
	b.Helper()
	for end := time.Now().Add(time.Minute); ; time.Sleep(20 * time.Millisecond) {
		if eval[bool](b, script) {
			return
		}
		if time.Now().After(end) {
			b.picture("stuck")
			b.Fatalf("waited a minute in vain: %s (%s)\nthe console says: %q", what, script, b.complaints())
		}
	}
}

// appear sets the size of the window in CSS pixels, and whether the theme is dark
// and motion reduced.
func (b *tab) appear(width int64, dark, still bool) {
	b.Helper()
	theme, motion := "light", "no-preference"
	if dark {
		theme = "dark"
	}
	if still {
		motion = "reduce"
	}
	call(b, emulation.SetDeviceMetricsOverride, emulation.SetDeviceMetricsOverrideParams{Width: width, Height: 900, DeviceScaleFactor: 1, Mobile: width < 600})
	call(b, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Features: []*emulation.MediaFeature{
		{Name: "prefers-color-scheme", Value: theme}, {Name: "prefers-reduced-motion", Value: motion},
	}})
}

// picture takes a picture of the whole page and keeps it where the environment
// says.
func (b *tab) picture(name string) {
	b.Helper()
	dir := os.Getenv("STRANDWISE_PICTURES")
	if dir == "" {
		return
	}
	b.save(dir, name, get(b, chromedp.CaptureScreenshot()))
	b.save(dir, name+"-whole", get(b, chromedp.FullScreenshot(100)))
}

func (b *tab) save(dir, name string, png []byte) {
	b.Helper()
	if err := os.MkdirAll(dir, 0o777); err != nil {
		b.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, name+".png"), png, 0o666); err != nil {
		b.Fatal(err)
	}
}
