package c3d_test

import (
	"bytes"
	"errors"
	"io"
	"math"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strandwise/ingest/c3d"
	"strandwise/ingest/fault"
)

// content returns the offset of the contents of a parameter in a written file:
// its type, its dimensions, its elements. The occurrence counts from 0.
func content(b []byte, name string, occurrence int) int {
	key := append([]byte{byte(len(name)), 0}, name...)
	for i := 516; i+len(key) < len(b); i++ {
		key[1] = b[i+1]
		if bytes.HasPrefix(b[i:], key) {
			if occurrence == 0 {
				return i + len(key) + 2
			}
			occurrence--
		}
	}
	panic("c3d_test: no parameter " + name)
}

// The parts of a record, from its contents.
const (
	toNext = -2
	toType = 0
	toDims = 1
)

// scalar returns the offset of the element of a scalar parameter.
func scalar(b []byte, name string, occurrence int) int { return content(b, name, occurrence) + 2 }

// start returns the offset of the record whose name is given.
func start(b []byte, name string, occurrence int) int {
	return content(b, name, occurrence) - 4 - len(name)
}

// put overwrites bytes and returns the offset.
func put(b []byte, offset int, bytes ...byte) int {
	copy(b[offset:], bytes)
	return offset
}

var (
	intel  = recording{order: c3d.Intel}
	nan    = intel.real(math.NaN())
	minus1 = intel.real(-1)
)

// TestFaults mutilates a sound file in every way the reader knows. Each fault
// names the byte that shows it.
func TestFaults(t *testing.T) {
	for _, c := range []struct {
		name    string
		damage  func(b []byte) (cut []byte, offset int)
		problem string
	}{
		{"empty", func(b []byte) ([]byte, int) { return nil, 0 }, "ends inside its header"},
		{"half a header", func(b []byte) ([]byte, int) { return b[:300], 300 }, "ends inside its header"},
		{"another format", func(b []byte) ([]byte, int) { return b, put(b, 1, 'Q') }, "is no C3D file"},
		{"parameters in the header", func(b []byte) ([]byte, int) { return b, put(b, 0, 1) }, "places its parameters in block 1"},
		{"parameters beyond the end", func(b []byte) ([]byte, int) { b[0] = 200; return b, len(b) }, "ends before its parameters"},
		{"half the parameters", func(b []byte) ([]byte, int) { return b[:700], 700 }, "ends inside its parameters"},
		{"unknown machine", func(b []byte) ([]byte, int) { return b, put(b, 515, 87) }, "states the machine 87"},
		{"no end of parameters", func(b []byte) ([]byte, int) { b[514] = 0; return b, put(b, 16, 0, 0) }, "does not say where its parameters end"},
		{"data before parameters", func(b []byte) ([]byte, int) { return b, put(b, 16, 2, 0) }, "places its data in block 2"},
		{"long name", func(b []byte) ([]byte, int) {
			end := 512 + 512*int(b[514])
			at := content(b, "RATE", 0) + toNext
			put(b, at, intel.word(end-3-at)...)
			return b, put(b, end-3, 5, 1, 'A')
		}, "runs past the end of its section"},
		{"far pointer", func(b []byte) ([]byte, int) { return b, put(b, content(b, "RATE", 0)+toNext, 0xff, 0xff) }, "outside their section"},
		{"near pointer", func(b []byte) ([]byte, int) { return b, put(b, content(b, "RATE", 0)+toNext, 1, 0) }, "outside their section"},
		{"short record", func(b []byte) ([]byte, int) {
			put(b, content(b, "LABELS", 0)+toNext, 3, 0)
			return b, content(b, "LABELS", 0)
		}, "holds too little for the parameter LABELS"},
		{"unknown type", func(b []byte) ([]byte, int) { return b, put(b, content(b, "RATE", 0)+toType, 3) }, "the type 3"},
		{"eight dimensions", func(b []byte) ([]byte, int) {
			put(b, content(b, "LABELS", 0)+toDims, 8)
			return b, content(b, "LABELS", 0)
		}, "8 dimensions"},
		{"huge dimensions", func(b []byte) ([]byte, int) {
			put(b, content(b, "LABELS", 0)+toDims+1, 255, 255)
			return b, content(b, "LABELS", 0)
		}, "holds too little"},
		{"group zero", func(b []byte) ([]byte, int) { at := start(b, "RATE", 0); b[at+1] = 0; return b, at }, "of group 0"},
		{"control character", func(b []byte) ([]byte, int) { at := start(b, "RATE", 0); b[at+2] = 7; return b, at }, "parameter named"},
		{"two groups of one number", func(b []byte) ([]byte, int) {
			at := start(b, "ANALOG", 0)
			b[at+1] = 0xff
			return b, at
		}, "two groups of number 1, POINT and ANALOG"},
		{"no POINT group", func(b []byte) ([]byte, int) { put(b, start(b, "POINT", 0)+2, 'J'); return b, 512 }, "holds no POINT parameters"},
		{"text for a number", func(b []byte) ([]byte, int) {
			put(b, content(b, "USED", 0), 0xff)
			return b, scalar(b, "USED", 0)
		}, "has no number in POINT:USED"},
		{"two places of the data", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "DATA_START", 0), 99) }, "block 99 by POINT:DATA_START"},
		{"data inside the parameters", func(b []byte) ([]byte, int) {
			put(b, 16, 0)
			return b, put(b, scalar(b, "DATA_START", 0), 2)
		}, "inside its parameters"},
		{"data beyond the end", func(b []byte) ([]byte, int) { put(b, 16, 0xff, 0xff); return b, len(b) }, "ends before its data"},
		{"points", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "USED", 0), 3) }, "3 points by POINT:USED, 2 by its header"},
		{"channels", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "USED", 1), 3) }, "3 analog channels of 2 samples in a frame, but 4"},
		{"channels without samples", func(b []byte) ([]byte, int) { put(b, 4, 0); put(b, 18, 0); return b, scalar(b, "USED", 1) }, "0 analog numbers"},
		{"neither points nor channels", func(b []byte) ([]byte, int) {
			for _, at := range []int{2, 4, scalar(b, "USED", 0), scalar(b, "USED", 1)} {
				b[at] = 0
			}
			return b, 2
		}, "neither points nor analog"},
		{"scale of nothing", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "SCALE", 0), 0, 0, 0, 0) }, "states the scale 0"},
		{"scale no number", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "SCALE", 0), nan...) }, "states the scale NaN"},
		{"two scales", func(b []byte) ([]byte, int) { put(b, 12, intel.real(0.25)...); return b, scalar(b, "SCALE", 0) }, "scale 0.5 by POINT:SCALE, 0.25 by its header"},
		{"two storages", func(b []byte) ([]byte, int) { put(b, 12, minus1...); return b, scalar(b, "SCALE", 0) }, "-1 by its header"},
		{"rate below zero", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "RATE", 0), minus1...) }, "states the frame rate -1"},
		{"rate no number", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "RATE", 0), nan...) }, "states the frame rate NaN"},
		{"no frames", func(b []byte) ([]byte, int) { put(b, 8, 0); return b, put(b, scalar(b, "FRAMES", 0), 0) }, "holds no frames"},
		{"more frames than there are", func(b []byte) ([]byte, int) {
			put(b, 8, 40)
			put(b, scalar(b, "FRAMES", 0), 40)
			return b, len(b)
		}, "ends after 3 whole frames of 40 frames by POINT:FRAMES"},
		{"last byte gone", func(b []byte) ([]byte, int) { return b[:len(b)-1], len(b) - 1 }, "ends after 2 whole frames"},
		{"two frame counts", func(b []byte) ([]byte, int) { put(b, 8, 40); b = append(b, make([]byte, 600)...); return b, 6 }, "states 3 frames by POINT:FRAMES, 40 frames by its header, and holds 28"},
		{"analog format", func(b []byte) ([]byte, int) {
			at := content(b, "FORMAT", 0) + 4
			return b, put(b, at, 'X')
		}, `analog format "XIGNED"`},
		{"analog scale", func(b []byte) ([]byte, int) { return b, put(b, scalar(b, "GEN_SCALE", 0), nan...) }, "states the analog scale NaN"},
		{"channel scale", func(b []byte) ([]byte, int) {
			at := content(b, "SCALE", 1) + 3
			return b, put(b, at, nan...)
		}, "states NaN in ANALOG:SCALE"},
		{"too few offsets", func(b []byte) ([]byte, int) {
			at := content(b, "OFFSET", 0)
			return b, put(b, at+toDims+1, 1) + 1
		}, "states ANALOG:OFFSET for 1 of 2 channels"},
		{"many header events", func(b []byte) ([]byte, int) { return b, put(b, 300, 19) }, "counts 19 events"},
		{"header event without time", func(b []byte) ([]byte, int) { return b, put(b, 304, nan...) }, `event "GO" at the time NaN`},
		{"events without times", func(b []byte) ([]byte, int) { put(b, scalar(b, "USED", 2), 2); return b, content(b, "TIMES", 0) + 4 }, "counts 2 events, but has 2 numbers"},
		{"event without time", func(b []byte) ([]byte, int) { at := content(b, "TIMES", 0) + 4; put(b, at, nan...); return b, at }, `event "Grip" at the time NaN`},
	} {
		t.Run(c.name, func(t *testing.T) {
			data, offset := c.damage(sample().write())
			_, err := c3d.Read(bytes.NewReader(data), c3d.Options{Name: "a.c3d"})
			var f *fault.Error
			if !errors.As(err, &f) {
				t.Fatalf("error %v, want a fault", err)
			}
			if f.File != "a.c3d" || f.Offset != int64(offset) || !strings.Contains(f.Problem, c.problem) || f.Remedy == "" {
				t.Errorf("%v\nat byte %d, want byte %d: … %s …", f, f.Offset, offset, c.problem)
			}
		})
	}
}

// TestContradictions writes files that could not be made by damaging a sound
// one.
func TestContradictions(t *testing.T) {
	set := func(group, name string, kind c3d.Type, numbers ...float64) func(r *recording) {
		return func(r *recording) {
			r.edit = func(p *parameter) {
				if p.group == group && p.name == name {
					p.kind, p.numbers = kind, numbers
				}
			}
		}
	}
	for _, c := range []struct {
		name    string
		change  func(r *recording)
		offset  func(b []byte) int
		channel string
		problem string
	}{
		{"half a frame", set("POINT", "FRAMES", c3d.Real, 2.5), func(b []byte) int { return scalar(b, "FRAMES", 0) }, "", "counts 2.5 in POINT:FRAMES"},
		{"endless frames", set("POINT", "FRAMES", c3d.Real, math.Inf(1)), func(b []byte) int { return scalar(b, "FRAMES", 0) }, "", "counts +Inf in POINT:FRAMES"},
		{"frames below zero", set("POINT", "FRAMES", c3d.Real, -3), func(b []byte) int { return scalar(b, "FRAMES", 0) }, "", "counts -3 in POINT:FRAMES"},
		{"two rates", func(r *recording) {
			r.extra = []parameter{{group: "POINT", name: "RATE", kind: c3d.Real, numbers: []float64{50}}}
		}, func(b []byte) int { return scalar(b, "RATE", 2) }, "", "states POINT:RATE twice"},
		{"infinite coordinate", func(r *recording) {
			r.float = true
			r.xyz[16] = math.Inf(-1)
		}, func(b []byte) int { return len(b) - 48 + 20 }, "RWRI", "in frame 2"},
		{"infinite sample", func(r *recording) {
			r.float = true
			r.stored[5] = math.Inf(1)
		}, func(b []byte) int { return len(b) - 2*48 + 32 + 4 }, "ACC1", "in frame 1"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := sample()
			c.change(r)
			data := r.write()
			_, err := c3d.Read(bytes.NewReader(data), c3d.Options{Name: "a.c3d"})
			var f *fault.Error
			if !errors.As(err, &f) {
				t.Fatalf("error %v, want a fault", err)
			}
			if want := c.offset(data); f.Offset != int64(want) || f.Channel != c.channel || !strings.Contains(f.Problem, c.problem) {
				t.Errorf("%v\nat byte %d, want byte %d: … %s …", f, f.Offset, want, c.problem)
			}
		})
	}
}

// TestReaderError passes on an error that is not the file's.
func TestReaderError(t *testing.T) {
	gone := errors.New("the disk is gone")
	data := sample().write()
	for n := range data {
		r := io.MultiReader(bytes.NewReader(data[:n]), iotest.ErrReader(gone))
		if _, err := c3d.Read(r, c3d.Options{}); !errors.Is(err, gone) {
			t.Fatalf("after %d bytes: error %v, want %v", n, err, gone)
		}
	}
}

// TestTolerance reads files that are odd but clear, and tells the user.
func TestTolerance(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(r *recording)
		damage func(b []byte) []byte
		notice string
	}{
		{"sound", nil, nil, ""},
		{"locked names", nil, func(b []byte) []byte {
			at := start(b, "RATE", 0)
			b[at] = 0xfc // -4
			return b
		}, ""},
		{"parameters said to reach into the data", nil, func(b []byte) []byte { b[514] = 250; return b }, ""},
		{"no count of parameter blocks", nil, func(b []byte) []byte { b[514] = 0; return b }, ""},
		{"place of the data in the parameter alone", nil, func(b []byte) []byte {
			put(b, scalar(b, "DATA_START", 0), b[16])
			b[16] = 0
			return b
		}, ""},
		{"no scale in the header", nil, func(b []byte) []byte { put(b, 12, 0, 0, 0, 0); return b }, ""},
		{"another scale of floats in the header", func(r *recording) { r.float = true }, func(b []byte) []byte { put(b, 12, minus1...); return b }, ""},
		{"lower case", nil, func(b []byte) []byte { put(b, start(b, "RATE", 0)+2, []byte("rate")...); return b }, ""},
		{"no parameter of points", nil, func(b []byte) []byte { put(b, start(b, "USED", 0)+2, 'X'); return b }, ""},
		{"no parameter of channels", nil, func(b []byte) []byte { put(b, start(b, "USED", 1)+2, 'X'); return b }, ""},
		{"no parameter of frames", nil, func(b []byte) []byte { put(b, start(b, "FRAMES", 0)+2, 'X'); return b }, ""},
		{"no range in the header", nil, func(b []byte) []byte { put(b, 6, 0, 0, 0, 0); return b }, ""},
		{"another rate in the header", nil, func(b []byte) []byte { put(b, 20, minus1...); return b }, "states another frame rate in its header than in POINT:RATE, which is taken"},
		{"another analog rate", func(r *recording) {
			r.edit = func(p *parameter) {
				if p.group == "ANALOG" && p.name == "RATE" {
					p.numbers = []float64{1000}
				}
			}
		}, nil, "states another analog rate than its frames have, which is taken"},
		{"range of a longer recording", nil, func(b []byte) []byte { put(b, 8, 200); return b }, "states several frame counts; the one that fills the file is taken"},
		{"wrong number of frames", nil, func(b []byte) []byte {
			put(b, scalar(b, "FRAMES", 0), 2)
			return append(b, make([]byte, 500)...)
		}, "states several frame counts; the one that fills the file is taken"},
		{"huge number of frames", func(r *recording) {
			r.edit = func(p *parameter) {
				if p.name == "FRAMES" {
					p.kind, p.numbers = c3d.Real, []float64{1 << 40}
				}
			}
		}, nil, "states several frame counts; the one that fills the file is taken"},
		{"more after the end", nil, func(b []byte) []byte { return append(b, make([]byte, 512)...) }, "goes on after its last frame; what follows is not read"},
		{"parameter of no group", nil, func(b []byte) []byte { b[start(b, "BITS", 0)+1] = 99; return b }, "has parameters of no group, which are left out"},
		{"no analog offsets", nil, func(b []byte) []byte { put(b, start(b, "OFFSET", 0)+2, 'X'); return b }, "states no ANALOG:OFFSET; 0 is taken"},
		{"no sign stated", func(r *recording) { r.bits = 16 }, func(b []byte) []byte { put(b, start(b, "FORMAT", 0)+2, 'X'); return b }, "has analog channels of 16 bits and does not say whether they have a sign; they are taken as signed"},
		{"older events", nil, func(b []byte) []byte { put(b, 298, 0, 0); return b }, "may hold events in an older form of header, which are not read"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := sample()
			if c.change != nil {
				c.change(r)
			}
			data := r.write()
			if c.damage != nil {
				data = c.damage(data)
			}
			notice := ""
			f, err := c3d.Read(bytes.NewReader(data), c3d.Options{Notice: func(text, _ string) { notice += text }})
			if err != nil {
				t.Fatal(err)
			}
			if notice != c.notice {
				t.Errorf("notice %q, want %q", notice, c.notice)
			}
			if f.Frames != 3 || f.Points.Rate != 100 || f.Analog.Rate != 200 {
				t.Errorf("%d frames at %v and %v Hz", f.Frames, f.Points.Rate, f.Analog.Rate)
			}
			if diff := cmp.Diff(r.positions(), f.Points.Data, cmpopts.EquateNaNs()); diff != "" {
				t.Errorf("want, got:\n%s", diff)
			}
		})
	}
}
