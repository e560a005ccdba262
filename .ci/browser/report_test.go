package browser_test

import (
	"fmt"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// slowest is how long the page of a large set may take to open.
const slowest = 2 * time.Second

// address returns the address of a file.
func address(t *testing.T, path string) string {
	t.Helper()
	path, err := filepath.Abs(path)
	if err != nil {
		t.Fatal(err)
	}
	return "file://" + filepath.ToSlash(path)
}

// goldenPage is the address of a page that the tests of package report hold.
func goldenPage(t *testing.T, name string) string {
	return address(t, filepath.Join("..", "..", "export", "report", "testdata", name+".html"))
}

// looks lists the widths and themes in which pages are looked at.
func looks(b *tab, each func(name string)) {
	for _, width := range []int64{1280, 390} {
		for _, dark := range []bool{false, true} {
			b.appear(width, dark, true)
			each(fmt.Sprintf("%d-%s", width, map[bool]string{false: "light", true: "dark"}[dark]))
		}
	}
}

func TestReport(t *testing.T) {
	for _, name := range []string{"whole", "bare"} {
		t.Run(name, func(t *testing.T) {
			b := newTab(t)
			looks(b, func(look string) {
				b.do(chromedp.Navigate(goldenPage(t, name)))
				b.picture("report-" + name + "-" + look)
				for _, fault := range eval[[]string](b, openAll+faults) {
					b.Errorf("%s: %s", look, fault)
				}
				b.checkQuiet()
			})
			for _, asked := range b.asked() {
				if asked != goldenPage(t, name) && !strings.HasPrefix(asked, "data:,") {
					b.Errorf("the page asked for %s", asked)
				}
			}
		})
	}
}

// openAll opens what is folded, so that it is looked at too.
const openAll = `document.querySelectorAll("details").forEach(d => d.open = true);`

// faults lists what is wrong with a page that is open: its width, headings,
// drawings without a text in their place, figures without a caption or numbers,
// and text that stands out too little from its ground.
const faults = `(() => {
	const faults = [];
	const root = document.documentElement;
	if (root.scrollWidth > root.clientWidth) faults.push("the page is " + root.scrollWidth + " wide in a window of " + root.clientWidth);

	let level = 0;
	for (const h of document.querySelectorAll("h1,h2,h3,h4,h5,h6")) {
		const n = +h.localName[1];
		if (n > level + 1) faults.push(h.localName + " after h" + level + ": " + h.textContent);
		level = n;
	}
	if (document.querySelectorAll("h1").length !== 1) faults.push("not one h1");

	for (const s of document.querySelectorAll("svg:not([aria-hidden])")) {
		if (s.getAttribute("role") !== "img" || !s.getAttribute("aria-label")) faults.push("a drawing has no text in its place");
	}
	for (const f of document.querySelectorAll("figure")) {
		if (!f.querySelector("figcaption")?.textContent) faults.push(f.id + " has no caption");
		if (!f.querySelector("table td")) faults.push(f.id + " has no numbers");
	}
	for (const s of document.querySelectorAll("figure svg[role=img]")) {
		const inside = s.getBoundingClientRect();
		for (const t of s.querySelectorAll("text")) {
			const r = t.getBoundingClientRect();
			if (r.left < inside.left - 1 || r.right > inside.right + 1 || r.top < inside.top - 1 || r.bottom > inside.bottom + 1)
				faults.push("a text reaches out of its drawing: " + t.textContent);
		}
	}

	const parse = c => { const v = c.match(/[\d.]+/g).map(Number); return v.length > 3 ? v : [...v, 1]; };
	const light = v => { v /= 255; return v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4; };
	const luminance = c => 0.2126 * light(c[0]) + 0.7152 * light(c[1]) + 0.0722 * light(c[2]);
	const ground = e => { for (; e; e = e.parentElement) { const c = parse(getComputedStyle(e).backgroundColor); if (c[3] === 1) return c; } return [255, 255, 255, 1]; };
	const seen = new Set();
	let texts = 0;
	const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
	while (walk.nextNode()) {
		const e = walk.currentNode.parentElement;
		if (!walk.currentNode.textContent.trim() || !e.getClientRects().length) continue;
		texts++;
		const style = getComputedStyle(e), ink = e.namespaceURI.endsWith("svg") ? style.fill : style.color;
		const a = luminance(parse(ink)), b = luminance(ground(e)), c = (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
		const what = ink + " on " + ground(e);
		if (c < 4.5 && !seen.has(what)) { seen.add(what); faults.push("contrast " + c.toFixed(2) + " of " + what + ": " + walk.currentNode.textContent.slice(0, 40)); }
	}
	if (texts < 30) faults.push("only " + texts + " texts were looked at");
	return faults;
})()`

// Whoever goes through the page by keyboard sees where they are.
func TestReportFocus(t *testing.T) {
	b := newTab(t)
	looks(b, func(look string) {
		b.do(chromedp.Navigate(goldenPage(t, "whole")))
		met := map[string]bool{}
		for range 40 {
			b.do(chromedp.KeyEvent(kb.Tab))
			at := eval[struct{ Name, Line, Width string }](b, `(() => { const e = document.activeElement, s = getComputedStyle(e); return {Name: e.localName, Line: s.outlineStyle, Width: s.outlineWidth}; })()`)
			if at.Name == "body" {
				break
			}
			met[at.Name] = true
			if at.Line != "solid" || at.Width == "0px" {
				b.Errorf("%s: the focus on <%s> does not show: %s %s", look, at.Name, at.Line, at.Width)
			}
		}
		for _, name := range []string{"a", "summary", "div"} {
			if !met[name] {
				b.Errorf("%s: the keyboard does not reach a <%s>", look, name)
			}
		}
	})
}

// made returns the address of a page that a test of package report makes; it
// skips where that test does.
func made(t *testing.T, test, name string) string {
	t.Helper()
	dir := t.TempDir()
	write := exec.Command("go", "test", "-count=1", "-v", "-run", "^"+test+"$", "./export/report", "-args", "-pages", dir)
	write.Dir = filepath.Join("..", "..")
	out, err := write.CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	if strings.Contains(string(out), "--- SKIP") {
		t.Skipf("skipped, since %s was:\n%s", test, out)
	}
	return address(t, filepath.Join(dir, name))
}

// Labels and subjects that hold anything at all show as text and break nothing.
func TestReportHostile(t *testing.T) {
	chromium(t)
	page := made(t, "TestHostileText", "hostile.html")
	b := newTab(t)
	looks(b, func(look string) {
		b.do(chromedp.Navigate(page))
		b.picture("report-hostile-" + look)
		for _, fault := range eval[[]string](b, openAll+faults) {
			b.Errorf("%s: %s", look, fault)
		}
		b.checkQuiet()
	})
	if asked := b.asked(); slices.ContainsFunc(asked, func(a string) bool { return a != page && !strings.HasPrefix(a, "data:,") }) {
		b.Errorf("the page asked for %q", asked)
	}
}

// The page of a set of 27 labels opens at once. It is the one that a test of
// package report makes of the open recordings.
func TestReportOpens(t *testing.T) {
	chromium(t)
	page := made(t, "TestOpenRecordings", "open.html")
	b := newTab(t)
	b.appear(1280, false, true)
	best := time.Hour
	for range 3 {
		b.do(chromedp.Navigate("about:blank"))
		began := time.Now()
		b.do(chromedp.Navigate(page))
		eval[bool](b, `new Promise(drawn => requestAnimationFrame(() => requestAnimationFrame(() => drawn(true))))`)
		best = min(best, time.Since(began))
	}
	t.Logf("opened and drawn in %.2f s", best.Seconds())
	if best > slowest {
		t.Errorf("the page took %v to open, want at most %v", best, slowest)
	}
	b.checkQuiet()
	b.picture("report-open")
}
