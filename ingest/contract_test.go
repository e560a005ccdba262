package ingest

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/ingest/bids"
	"strandwise/ingest/raw"
)

// TestReadBeside reads a sidecar as a format would.
func TestReadBeside(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "a.json"), []byte("{}"), 0o644); err != nil {
		t.Fatal(err)
	}
	s := source{name: "a.tsv", path: filepath.Join(dir, "a.tsv")}
	b, file, err := readBeside(s, "a.json")
	// The hash of "{}" is a known value (sha256sum).
	want := File{filepath.Join(dir, "a.json"), 2, "44136fa355b3678a1146ad16f7e8649e94fb4fc21fe77e8310c060f61caaff8a"}
	if err != nil || string(b) != "{}" || file != want {
		t.Errorf("%q, %+v, %v", b, file, err)
	}
	if _, _, err := readBeside(s, "b.json"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("error %v", err)
	}
}

// TestFrameOfSeveralLayouts matches layouts as formats other than text may
// state them: without units in brackets, in any order.
func TestFrameOfSeveralLayouts(t *testing.T) {
	column := func(header string) raw.Column {
		c, unit := channels.ParseHeader(header)
		return raw.Column{Channel: c, Unit: unit}
	}
	layout := func(headers ...string) *raw.Layout {
		l := &raw.Layout{}
		for _, h := range headers {
			l.Columns = append(l.Columns, column(h))
		}
		return l
	}
	f, err := fixFrame(layout("q.quat.w [1]", "hip.angle.x [deg]", "m [mT]", "n"), "first", &Options{}, keepAll)
	if err != nil {
		t.Fatal(err)
	}
	var units []string
	for _, c := range f.layout.Channels {
		units = append(units, string(c.Quantity)+" "+c.Unit)
	}
	if d := cmp.Diff([]string{"ORNT 1", "JNTANG rad", "MAGN T", "MISC "}, units); d != "" {
		t.Error(d)
	}
	fitted, err := f.fit(layout("n", "m [uT]", "hip.angle.x [rad]", "q.quat.w [1]"), "second")
	if err != nil {
		t.Fatal(err)
	}
	data := []float64{1, 2e6, 3, 4, 5, 6e6, 7, 8}
	fitted.apply(data)
	if d := cmp.Diff([]float64{4, 3, 2, 1, 8, 7, 6, 5}, data); d != "" {
		t.Error(d)
	}
	if _, err := f.fit(layout("n", "m [uT]", "hip.angle.x [m]", "q.quat.w [1]"), "third"); err == nil || !strings.Contains(err.Error(), "no unit m") {
		t.Errorf("error %v", err)
	}
}

// TestFormatsStandBehindTheContract holds every format to what raw.Format
// says.
func TestFormatsStandBehindTheContract(t *testing.T) {
	for _, f := range new(Options).formats() {
		for _, e := range f.Extensions() {
			if e == "" || e[0] != '.' || e != strings.ToLower(e) {
				t.Errorf("%T: extension %q", f, e)
			}
		}
		if _, sidecars := f.(bids.Format); sidecars {
			continue // reads its sidecars first; its own tests hold it to the contract
		}
		broken := errors.New("broken")
		n := 0
		for take, err := range f.Read(io.MultiReader(strings.NewReader(""), failing{broken}), raw.Input{Name: "x"}) {
			if n++; take != nil || !errors.Is(err, broken) {
				t.Errorf("%T: take %v, error %v", f, take, err)
			}
		}
		if n != 1 {
			t.Errorf("%T: %d pairs after a read error", f, n)
		}
	}
}

type failing struct{ err error }

func (f failing) Read([]byte) (int, error) { return 0, f.err }

func keepAll(string) bool { return false }
