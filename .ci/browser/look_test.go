package browser_test

import (
	"bufio"
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"
)

// TestMain gives the tests a temporary folder of their own, and removes it.
func TestMain(m *testing.M) {
	dir, err := os.MkdirTemp("", "strandwise-browser-")
	if err != nil {
		panic(err)
	}
	os.Setenv("TMPDIR", dir)
	code := m.Run()
	os.RemoveAll(dir)
	os.Exit(code)
}

// program builds the command once and returns its path.
var program = sync.OnceValues(func() (string, error) {
	path := filepath.Join(os.TempDir(), "strandwise")
	build := exec.Command("go", "build", "-o", path, "./cmd/strandwise")
	build.Dir = filepath.Join("..", "..")
	if out, err := build.CombinedOutput(); err != nil {
		return "", fmt.Errorf("%w\n%s", err, out)
	}
	return path, nil
})

// run runs the command to its end.
func run(t *testing.T, args ...string) {
	t.Helper()
	path, err := program()
	if err != nil {
		t.Fatal(err)
	}
	if out, err := exec.Command(path, args...).CombinedOutput(); err != nil {
		t.Fatalf("strandwise %s: %v\n%s", strings.Join(args, " "), err, out)
	}
}

// looker is a running strandwise look.
type looker struct {
	*exec.Cmd
	address string
}

// look starts strandwise look on a set.
func look(t *testing.T, set string, args ...string) *looker {
	t.Helper()
	path, err := program()
	if err != nil {
		t.Fatal(err)
	}
	c := exec.Command(path, append([]string{"look", set, "--json"}, args...)...)
	var fault bytes.Buffer
	c.Stderr = &fault
	out, err := c.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = c.Process.Kill(); _ = c.Wait() }) // it may have been ended before
	said := struct{ Address string }{}
	if err := json.NewDecoder(bufio.NewReader(out)).Decode(&said); err != nil {
		t.Fatalf("strandwise look: %v\n%s", err, fault.String())
	}
	return &looker{c, said.Address}
}

// kill ends it as a crash does.
func (l *looker) kill(t *testing.T) {
	t.Helper()
	if err := l.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	_ = l.Wait() // it was killed
}

// wristbands writes a small invented set of two wristbands, which has no
// positions.
func wristbands(t *testing.T) string {
	t.Helper()
	var b strings.Builder
	b.WriteString("take,label,subject,session,split,time_s,left_wrist.accel.x [m/s^2],left_wrist.accel.y [m/s^2],left_wrist.accel.z [m/s^2],right_wrist.gyro.x [rad/s]\n")
	for n := range 12 {
		for i := range 60 {
			x := float64(i) / 59
			fmt.Fprintf(&b, "cue-%d,%s,%s,one,train,%.2f,%.4f,%.4f,%.4f,%.4f\n", n, []string{"curtain", "lantern"}[n%2], []string{"pim", "wick"}[n/2%2],
				float64(i)/50, 3*x*(1-x)*float64(1+n%2), 2*x*x*(1+0.1*float64(n)), 9.81+x, (x-0.5)*(x-0.5)*float64(2+n%3))
		}
	}
	return grown(t, "wristbands.csv", b.String())
}

// bodies writes a small invented set of a puppet with positions in space.
func bodies(t *testing.T) string {
	t.Helper()
	points := []struct {
		name    string
		x, y, z float64
	}{{"hips", 0, 1, 0}, {"head", 0, 1.6, 0}, {"left_hand", -0.6, 1.3, 0}, {"right_hand", 0.6, 1.3, 0}, {"left_foot", -0.1, 0, 0}, {"right_foot", 0.1, 0, 0}}
	var b strings.Builder
	b.WriteString("take,label,subject,split,time_s")
	for _, p := range points {
		for _, axis := range "xyz" {
			fmt.Fprintf(&b, ",%s.pos.%c [m]", p.name, axis)
		}
	}
	b.WriteString("\n")
	for n := range 6 {
		for i := range 90 {
			x := float64(i) / 89
			fmt.Fprintf(&b, "bow-%d,%s,pim,train,%.3f", n, []string{"bow", "wave"}[n%2], float64(i)/60)
			for k, p := range points {
				swing := 4 * x * (1 - x) * float64(k%4) * (0.12 + 0.02*float64(n))
				fmt.Fprintf(&b, ",%.4f,%.4f,%.4f", p.x+swing*0.4*float64(n%2), p.y+0.3*swing*float64(k/2%2), p.z+swing)
			}
			b.WriteString("\n")
		}
	}
	return grown(t, "bodies.csv", b.String(), "--gate", "all=off") // movements so plain that most draws would be refused
}

// grown grows a set from one invented recording, once, and returns a copy of it.
func grown(t *testing.T, name, text string, more ...string) string {
	t.Helper()
	dir := t.TempDir()
	file, set := filepath.Join(dir, name), filepath.Join(dir, "set")
	sets.Lock()
	defer sets.Unlock()
	if sets.grown[name] == "" {
		if err := os.WriteFile(file, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		kept, err := os.MkdirTemp("", "grown-")
		if err != nil {
			t.Fatal(err)
		}
		run(t, append([]string{"grow", file, "--per-take", "8", "--seed", "3", "--out", filepath.Join(kept, "set")}, more...)...)
		sets.grown[name] = kept
	}
	if err := os.CopyFS(set, os.DirFS(filepath.Join(sets.grown[name], "set"))); err != nil {
		t.Fatal(err)
	}
	return set
}

// sets are those grown so far, by the name of their recording.
var sets = struct {
	sync.Mutex
	grown map[string]string
}{grown: map[string]string{}}

// open opens the page of a running look and waits for its first take.
func (b *tab) open(l *looker) {
	b.Helper()
	b.do(chromedp.Navigate(l.address))
	b.loaded()
}

func (b *tab) loaded() {
	b.Helper()
	b.until("the page shows a take", `document.querySelectorAll("#traces canvas.trace").length > 0 && document.querySelector("#takes tr[aria-current]") !== null`)
}

// key types keys wherever the focus is.
func (b *tab) key(keys string) {
	b.Helper()
	b.do(chromedp.KeyEvent(keys))
}

// text returns what an element shows.
func (b *tab) text(selector string) string {
	b.Helper()
	return eval[string](b, fmt.Sprintf(`document.querySelector(%q).textContent.trim().replace(/\s+/g, " ")`, selector))
}

func (b *tab) pressed(id string) bool {
	b.Helper()
	return eval[bool](b, fmt.Sprintf(`document.getElementById(%q).getAttribute("aria-pressed") === "true"`, id))
}

// name returns the name of the take that is open.
func (b *tab) name() string { return b.text("#take-name") }

// synthetic goes by keys to the first synthetic take.
func (b *tab) synthetic() {
	b.Helper()
	for range 20 {
		if !eval[bool](b, `document.getElementById("right").hidden`) {
			return
		}
		before := b.name()
		b.key("n")
		b.until("the next take is open", fmt.Sprintf(`document.getElementById("take-name").textContent !== %q`, before))
	}
	b.Fatal("none of the first takes is synthetic")
}

const clockText = `document.getElementById("time-text").textContent`

func TestLookPlaysATake(t *testing.T) {
	b := newTab(t)
	b.appear(1280, false, false)
	b.open(look(t, bodies(t)))
	b.synthetic()
	b.picture("bodies-1280-light")
	still := eval[string](b, `document.querySelector("#right canvas.figure").toDataURL()`)
	b.key(" ")
	b.until("the clock goes on", `parseFloat(`+clockText+`) > 0.1`)
	if moved := eval[string](b, `document.querySelector("#right canvas.figure").toDataURL()`); moved == still {
		t.Error("the clock goes on, and the figure stands")
	}
	b.until("the take ends", `document.getElementById("play").textContent.includes("Play")`)
	if text := b.text("#time-text"); strings.Split(text, " of ")[0] != strings.Split(text, " of ")[1] {
		t.Errorf("the clock stands at %s", text)
	}
	turned := eval[string](b, `document.querySelector("#left canvas.figure").toDataURL()`)
	b.do(chromedp.Focus(chromedp.CSS("#right canvas.figure")))
	b.key(kb.ArrowLeft)
	if now := eval[string](b, `document.querySelector("#left canvas.figure").toDataURL()`); now == turned {
		t.Error("an arrow key on one figure did not turn both")
	}
	b.checkQuiet()
	b.checkOwnRequests()
}

// checkOwnRequests fails when the page asked anything of anyone else.
func (b *tab) checkOwnRequests() {
	b.Helper()
	asked := b.asked()
	if len(asked) < 5 {
		b.Errorf("only %d requests were seen", len(asked))
	}
	for _, address := range asked {
		if !strings.HasPrefix(address, "http://127.0.0.1:") && !strings.HasPrefix(address, "data:") {
			b.Errorf("the page asked for %s", address)
		}
	}
}

func TestLookStandsStillWhenAsked(t *testing.T) {
	b := newTab(t)
	b.appear(1280, false, true)
	b.open(look(t, bodies(t)))
	b.synthetic()
	label := eval[string](b, `document.querySelector("#right canvas.figure").getAttribute("aria-label")`)
	if !strings.Contains(label, "6 tracked points over") || !strings.Contains(label, "goes farthest") {
		t.Errorf("the text in place of the figure is %q", label)
	}
	before := eval[string](b, clockText)
	b.do(chromedp.Sleep(300e6))
	if now := eval[string](b, clockText); now != before {
		t.Errorf("the clock went from %s to %s by itself", before, now)
	}
	b.picture("bodies-1280-still")
	b.checkQuiet()
}

func TestLookMarksSurvive(t *testing.T) {
	set := wristbands(t)
	l := look(t, set)
	b := newTab(t)
	b.appear(1280, false, false)
	b.open(l)
	b.synthetic()
	name := b.name()
	b.key("d")
	b.until("the take is dropped", `document.getElementById("drop").getAttribute("aria-pressed") === "true"`)
	b.do(chromedp.Reload())
	b.loaded()
	if b.name() != name || !b.pressed("drop") {
		t.Errorf("after a reload: %s, dropped %v; want %s", b.name(), b.pressed("drop"), name)
	}
	b.key("n")
	b.until("the next take is open", fmt.Sprintf(`document.getElementById("take-name").textContent !== %q`, name))
	b.key("k")
	b.until("the take is kept", `document.getElementById("keep").getAttribute("aria-pressed") === "true"`)
	l.kill(t)
	b.checkQuiet()
	b.key("d")
	b.until("the page says that the server is gone", `!document.getElementById("trouble").hidden`)
	if text := b.text("#trouble-text"); !strings.Contains(text, "does not answer") {
		t.Errorf("the page says %q", text)
	}
	if b.pressed("drop") {
		t.Error("a mark that was not saved is shown")
	}
	b.picture("trouble-1280")
	again := look(t, set)
	if again.address == l.address {
		t.Error("the address is the same as before")
	}
	b.complaints() // of the connection that was cut
	b.open(again)
	if text := b.text("#about"); !strings.Contains(text, "Marked: 1 to drop, 1 to keep") {
		t.Errorf("after a kill: %s", text)
	}
	b.key("u")
	b.until("the kept take is open without a mark", `document.getElementById("about").textContent.includes("1 to drop, 0 to keep")`)
	data, err := os.ReadFile(filepath.Join(set, "marks.csv"))
	if err != nil || strings.Count(string(data), "\n") != 4 {
		t.Errorf("marks.csv: %v\n%s", err, data)
	}
	b.checkQuiet()
}

// TestLookAddressOpensOnce: a second browser that has the address is refused, in
// words.
func TestLookAddressOpensOnce(t *testing.T) {
	l := look(t, wristbands(t))
	newTab(t).open(l)
	other := newTab(t)
	other.do(chromedp.Navigate(l.address))
	if text := other.text("body"); !strings.Contains(text, "each address opens it once") {
		t.Errorf("the second browser sees %q", text)
	}
}

// TestLookByKeyboardAlone: from the address on, everything by keys.
func TestLookByKeyboardAlone(t *testing.T) {
	b := newTab(t)
	b.appear(1280, false, false)
	b.open(look(t, wristbands(t)))
	b.key(kb.Tab)
	if at := b.text(":focus"); at != "Skip to the take" {
		t.Errorf("the first stop of the Tab key is %q", at)
	}
	b.picture("skip-1280")
	b.key(kb.Enter)
	b.checkFocusSeen("bench")

	b.key("f")
	b.checkFocusSeen("label")
	for range 3 { // to the origin
		b.key(kb.Tab)
	}
	b.key(kb.ArrowDown + kb.ArrowDown)
	b.until("only synthetic takes are listed", `[...document.querySelectorAll("#takes tbody button")].every((e) => e.textContent.startsWith("○"))`)
	b.key(kb.Tab + kb.Tab + kb.Tab) // over split and mark to the gate
	b.key(kb.ArrowDown + kb.Tab + "highest")
	b.until("the order is by a gate's value", `document.querySelector("#wanted [name=order]").value === "high" && !document.getElementById("gate-head").hidden`)
	b.until("the highest values come first", `((v) => v.length > 1 && v.every((x, i) => !i || x <= v[i-1]))([...document.querySelectorAll("#takes td.gate")].map((e) => parseFloat(e.textContent)).filter((x) => !isNaN(x)))`)

	b.key("l") // typed into the choice of the order: it does nothing else
	b.script(`document.activeElement.blur()`)
	b.key("l")
	b.checkFocusSeen("")
	b.key(kb.Tab + kb.Enter)
	b.until("a take of the list is open", `!document.getElementById("right").hidden`)
	seen := b.name()
	b.key("k")
	b.until("it is kept", `document.getElementById("keep").getAttribute("aria-pressed") === "true"`)
	b.key("n")
	b.until("the next is open", fmt.Sprintf(`document.getElementById("take-name").textContent !== %q`, seen))
	b.key("d")
	b.until("it is dropped", `document.getElementById("drop").getAttribute("aria-pressed") === "true"`)
	b.key("u")
	b.until("the drop is taken back", `document.getElementById("about").textContent.includes("0 to drop, 1 to keep")`)
	b.key("p")
	b.until("the kept one is open again", `document.getElementById("keep").getAttribute("aria-pressed") === "true"`)
	before := b.text("#time-text")
	b.key(".")
	if b.text("#time-text") == before {
		t.Error("the full stop did not go on by a frame")
	}
	b.checkEveryStop()
	b.checkQuiet()
}

// checkFocusSeen fails when what has the focus is another element than that of the
// id or name, or is not outlined.
func (b *tab) checkFocusSeen(id string) {
	b.Helper()
	at := eval[struct {
		ID, Outline string
		Width       float64
	}](b, `(() => { const e = document.activeElement, s = getComputedStyle(e); return { ID: e.id || e.name || "", Outline: s.outlineStyle, Width: parseFloat(s.outlineWidth) } })()`)
	if id != "" && at.ID != id || at.Outline == "none" || at.Width < 2 {
		b.Errorf("the focus is on %q, outlined %s by %g px; want %q, outlined", at.ID, at.Outline, at.Width, id)
	}
}

// checkEveryStop goes through the page by the Tab key and fails where the focus
// is not seen or the key does not get on, and when it misses a control.
func (b *tab) checkEveryStop() {
	b.Helper()
	b.do(chromedp.Reload()) // so that the Tab key begins at the top
	b.loaded()
	b.script(`window.stops = new Set()`)
	most := eval[int](b, `document.querySelectorAll("a, button, select, input, summary, canvas[tabindex], .scroll[tabindex]").length`) + 5
	for range most {
		b.key(kb.Tab)
		if eval[bool](b, `document.activeElement === document.body`) {
			break
		}
		b.checkFocusSeen("")
		b.script(`window.stops.add(document.activeElement)`)
	}
	missed := eval[[]string](b, `[...document.querySelectorAll("a, button, select, input, summary, canvas[tabindex]")]
		.filter((e) => !e.disabled && e.checkVisibility({ checkVisibilityCSS: true }) && !window.stops.has(e)).map((e) => e.outerHTML.slice(0, 80))`)
	if len(missed) > 0 {
		b.Errorf("the Tab key does not reach %q", missed)
	}
}

// hostile is a set of takes whose names do what names can do.
func hostile(t *testing.T) string {
	t.Helper()
	names := []string{
		`<img src=x onerror="document.title='hacked'"><script>alert(1)</script>`, `"' onmouseover='alert(2)' x="`, "\u202eright to left\u2067 and \u200fmore",
		strings.Repeat("long ", 2000), `{{.}} ${1+1} &amp; %3Cb%3E`, `../../etc/passwd`,
	}
	var b strings.Builder
	b.WriteString("take,label,subject,session,split,time_s,left.accel.x [m/s^2],left.accel.y [m/s^2],left.accel.z [m/s^2]\n")
	for n, name := range names {
		quoted := `"` + strings.ReplaceAll(name, `"`, `""`) + `"`
		for i := range 30 {
			x := float64(i) / 29
			fmt.Fprintf(&b, "%s,%s,%s,%s,train,%.2f,%.4f,%.4f,%.4f\n", quoted, quoted, quoted, quoted, float64(i)/50, x*(1-x)*float64(n+1), x*x, 9.8-x)
		}
	}
	return grown(t, "hostile.csv", b.String())
}

func TestLookShowsNamesAsText(t *testing.T) {
	b := newTab(t)
	b.appear(390, false, false)
	b.open(look(t, hostile(t)))
	var names []string
	for range 60 {
		name := b.name()
		names = append(names, name)
		b.checkNoSideways()
		b.key("n")
		b.until("the next take is open, or there is none", fmt.Sprintf(`document.getElementById("take-name").textContent.trim().replace(/\s+/g, " ") !== %q || document.getElementById("news").textContent.includes("last take")`, name))
		if b.text("#news") == "That was the last take of the list." {
			break
		}
	}
	all := strings.Join(names, "\n")
	for _, part := range []string{`<script>alert(1)</script>`, `onmouseover='alert(2)'`, "right to left", "long long long", "%3Cb%3E", "../../etc/passwd"} {
		if !strings.Contains(all, part) {
			t.Errorf("no take was named as it is called, with %q", part)
		}
	}
	if n := eval[int](b, `document.querySelectorAll("img, main script, main [onmouseover]").length`); n > 0 {
		t.Errorf("%d elements were made of names", n)
	}
	b.picture("hostile-390")
	b.checkQuiet()
}

// checkNoSideways fails when the page is wider than the window.
func (b *tab) checkNoSideways() {
	b.Helper()
	if over := eval[int](b, `document.documentElement.scrollWidth - document.documentElement.clientWidth`); over > 0 {
		wide := eval[[]string](b, `[...document.querySelectorAll("body *")].filter((e) => e.getBoundingClientRect().right > innerWidth + 1 && !e.closest(".scroll, .skips")).map((e) => e.outerHTML.slice(0, 90))`)
		b.Errorf("the page is %d pixels wider than the window: %q", over, wide)
	}
}

// TestLookIsReadable holds headings, names and contrast, in both themes and at
// two widths, against what anybody needs to read a page.
func TestLookIsReadable(t *testing.T) {
	bands, puppet := wristbands(t), bodies(t)
	for _, set := range []struct{ name, dir string }{{"wristbands", bands}, {"bodies", puppet}} {
		b := newTab(t)
		l := look(t, set.dir)
		b.appear(1280, false, false)
		b.open(l)
		b.synthetic()
		b.key("d")
		b.until("it is dropped", `document.getElementById("drop").getAttribute("aria-pressed") === "true"`)
		b.script(`document.querySelectorAll("details").forEach((d) => { d.open = true })`)
		for _, width := range []int64{1280, 390} {
			for _, dark := range []bool{false, true} {
				b.appear(width, dark, false)
				theme := map[bool]string{false: "light", true: "dark"}[dark]
				b.do(chromedp.Sleep(200e6))
				b.picture(fmt.Sprintf("%s-%d-%s", set.name, width, theme))
				b.checkReadable()
				b.checkNoSideways()
			}
		}
		b.checkQuiet()
	}
}

// checkReadable checks headings, names of controls and canvases, and contrast.
func (b *tab) checkReadable() {
	b.Helper()
	levels := eval[[]int](b, `[...document.querySelectorAll("h1, h2, h3, h4, h5, h6")].filter((e) => e.checkVisibility()).map((e) => Number(e.tagName[1]))`)
	for i, level := range levels {
		if i == 0 && level != 1 || i > 0 && (level == 1 || level > levels[i-1]+1) {
			b.Errorf("headings are of the levels %v", levels)
			break
		}
	}
	nameless := eval[[]string](b, `[...document.querySelectorAll("button, select, input, canvas, summary, a")].filter((e) => e.checkVisibility() && e.getAttribute("aria-hidden") !== "true")
		.filter((e) => !(e.getAttribute("aria-label") || e.textContent.trim() || e.labels?.[0]?.textContent.trim())).map((e) => e.outerHTML.slice(0, 80))`)
	if len(nameless) > 0 {
		b.Errorf("without a name: %q", nameless)
	}
	type pale struct {
		Text  string
		Ratio float64
	}
	for _, p := range eval[[]pale](b, contrastScript) {
		b.Errorf("%q has a contrast of %.2f, below 4.5", p.Text, p.Ratio)
	}
	if n := eval[int](b, `window.textsSeen`); n < 60 {
		b.Errorf("the contrast of %d texts only was measured", n)
	}
}

// contrastScript measures the contrast of every text that is seen, by the formula
// of WCAG 2.2, relative luminance and contrast ratio.
const contrastScript = `(() => {
	const parse = (c) => { const m = c.match(/[\d.]+/g).map(Number); return { rgb: m.slice(0, 3), a: m.length > 3 ? m[3] : 1 } };
	const light = (rgb) => rgb.map((v) => v / 255).map((v) => (v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4)).reduce((s, v, i) => s + v * [0.2126, 0.7152, 0.0722][i], 0);
	const ground = (e) => { for (; e; e = e.parentElement) { const c = parse(getComputedStyle(e).backgroundColor); if (c.a > 0) return c.rgb } return [255, 255, 255] };
	const out = []; let seen = 0;
	const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
	while (walk.nextNode()) {
		const e = walk.currentNode.parentElement;
		if (!walk.currentNode.data.trim() || !e.checkVisibility({ checkVisibilityCSS: true, checkOpacity: true }) || e.closest(".unseen, .skips, option")) continue;
		seen++;
		const [a, b] = [light(parse(getComputedStyle(e).color).rgb), light(ground(e))].sort((x, y) => y - x);
		const ratio = (a + 0.05) / (b + 0.05);
		if (ratio < 4.5) out.push({ Text: walk.currentNode.data.trim().slice(0, 40), Ratio: ratio });
	}
	// Words and lines on canvases have the colours of the theme on that of the canvas.
	const style = getComputedStyle(document.documentElement), probe = document.body.appendChild(document.createElement("i"));
	const named = (n) => { probe.style.color = style.getPropertyValue("--" + n); return light(parse(getComputedStyle(probe).color).rgb) };
	for (const n of ["quiet", "ink", "recorded", "made", "part0", "part1", "part2", "part3"]) {
		const [a, b] = [named(n), named("card")].sort((x, y) => y - x), ratio = (a + 0.05) / (b + 0.05);
		if (ratio < 4.5) out.push({ Text: "canvas: " + n, Ratio: ratio });
	}
	probe.remove();
	window.textsSeen = seen;
	return out;
})()`
