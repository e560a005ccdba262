package variation_test

import (
	"bytes"
	"flag"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/augment/variation"
)

var update = flag.Bool("update", false, "write the golden files anew")

// written is a small measurement with something of everything.
func written() *variation.Measured {
	return &variation.Measured{
		Version: 1, Takes: 12, Labels: 2,
		Motions: []variation.Motion{{Kind: variation.Gesture, Ends: 0.2, Periodicity: 0.1, Takes: 12}, {Label: "wave", Kind: variation.Ongoing, Ends: 0.7, Periodicity: 0.9, Takes: 6}},
		Figures: []variation.Figure{
			{Part: variation.Timing, Unit: "log", Used: 0.21, Measured: 0.2314, Low: 0.152, High: 0.31, Raw: 0.22, Pairs: 60, Takes: 12},
			{Part: variation.Amplitude, Of: "left", Unit: "log", Used: 0.12, Measured: 0.11, Low: 0.08, High: 0.2, Raw: 0.1, Pairs: 60, Takes: 12},
			{Part: variation.Amplitude, Unit: "log", Used: 0.15, Measured: 0.16, Low: 0.1, High: 0.3, Raw: 0.14, Pairs: 60, Takes: 12},
			{Part: variation.Orientation, Unit: "rad", Used: 0.15, Default: true, Pairs: 60, Takes: 12, Why: "no pair of takes tells it"},
			{Part: variation.Noise, Of: "left.accel.x", Unit: "m/s^2", Used: 0.004, Measured: 0.0123, Low: 0.01, High: 0.015, Raw: 0.0123, Takes: 5},
			{Part: variation.Amplitude, Label: "wave", Of: "left", Unit: "log", Used: 0.13, Measured: 0.2, Low: 0.1, High: 0.5, Raw: 0.2, Pairs: 30, Takes: 6},
		},
		Spectra:  []variation.Spectrum{{Channel: "left.accel.x", Rate: 50, Shares: []float64{0.2, 0.5, 0.3}}},
		Coupling: []variation.Coupling{{A: "left", B: "right", Rho: 0.7, Low: 0.4, High: 0.9, P: 0.01}},
	}
}

func TestStoreAndRead(t *testing.T) {
	for name, m := range map[string]*variation.Measured{"written": written(), "measured": measure(t, quick(), waves(t)...)} {
		var b bytes.Buffer
		if err := m.Write(&b); err != nil {
			t.Fatal(err)
		}
		got, err := variation.Read(&b)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if d := cmp.Diff(m, got); d != "" {
			t.Errorf("%s came back changed:\n%s", name, d)
		}
	}
}

func TestReadRefuses(t *testing.T) {
	var b bytes.Buffer
	if err := written().Write(&b); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	for _, c := range []struct{ name, old, new, says string }{
		{"nothing", text, "", "EOF"},
		{"half of it", text[len(text)/2:], "", "EOF"},
		{"an unknown key", `"takes": 12,`, `"takes": 12, "reach": 1,`, "reach"},
		{"another version", `"version": 1`, `"version": 2`, "version 2; this program reads version 1"},
		{"an unknown part", `"part": "timing"`, `"part": "tempo"`, `unknown part "tempo"`},
		{"an unknown kind", `"kind": "ongoing"`, `"kind": "dance"`, `kind "dance" of label "wave"`},
		{"a size below 0", `"low": 0.152`, `"low": -1`, "figure 1: timing: -1 is not a size"},
		{"a size that is too large", `"used": 0.21`, `"used": 21`, "used 21; it must lie between 0 and 3"},
		{"a figure twice", `"label": "wave",
   "of": "left"`, `"of": "left"`, "figure 6: amplitude of left comes twice, first as figure 2"},
		{"shares that do not add up", `0.5,
    0.3`, `0.4,
    0.3`, "must add up to 1"},
		{"a coupling above 1", `"rho": 0.7`, `"rho": 1.7`, "coupling of left and right"},
		{"something behind", text, text + "{}", "something follows"},
	} {
		changed := strings.Replace(text, c.old, c.new, 1)
		if changed == text {
			t.Fatalf("%s: nothing changed", c.name)
		}
		if _, err := variation.Read(strings.NewReader(changed)); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: error %v, want it to say %q", c.name, err, c.says)
		}
	}
}

// What is read and found sound is written and read again as it was.
func FuzzRead(f *testing.F) {
	var b bytes.Buffer
	if err := written().Write(&b); err != nil {
		f.Fatal(err)
	}
	f.Add(b.Bytes())
	f.Add([]byte(`{"version":1,"takes":0,"labels":0,"motions":null,"figures":[],"spectra":[]}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		m, err := variation.Read(bytes.NewReader(data))
		if err != nil {
			return
		}
		var out bytes.Buffer
		if err := m.Write(&out); err != nil {
			t.Fatal(err)
		}
		again, err := variation.Read(&out)
		if err != nil {
			t.Fatal(err)
		}
		if d := cmp.Diff(m, again); d != "" {
			t.Error(d)
		}
	})
}

func TestTable(t *testing.T) {
	var b bytes.Buffer
	for _, labels := range []bool{false, true} {
		if err := written().Table(&b, labels); err != nil {
			t.Fatal(err)
		}
	}
	const golden = "testdata/table.golden"
	if *update {
		if err := os.WriteFile(golden, b.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(string(want), b.String()); d != "" {
		t.Errorf("the table changed (run with -update to accept):\n%s", d)
	}
}

// Recordings whose labels and groups have other names get the figures of all.
func TestFind(t *testing.T) {
	m := written()
	for _, c := range []struct {
		part      variation.Part
		label, of string
		used      float64
		own       bool
	}{
		{variation.Amplitude, "wave", "left", 0.13, true},
		{variation.Amplitude, "circle", "left", 0.12, false},
		{variation.Amplitude, "", "left", 0.12, true},
		{variation.Amplitude, "wave", "right", 0.15, false},
		{variation.Amplitude, "", "", 0.15, true},
		{variation.Timing, "wave", "left", 0.21, false},
		{variation.Trim, "wave", "", variation.Trim.Default(), false},
	} {
		if f, own := m.Find(c.part, c.label, c.of); f.Used != c.used || own != c.own || f.Part != c.part {
			t.Errorf("%s of %q in %q: %+v, own %v, want %v, %v", c.part, c.of, c.label, f, own, c.used, c.own)
		}
	}
	if k := m.Motion("circle"); k.Kind != variation.Gesture || k.Label != "" {
		t.Errorf("the kind of an unknown label: %+v", k)
	}
	if k := new(variation.Measured).Motion("wave"); k.Kind != variation.Gesture {
		t.Errorf("the kind where nothing was measured: %+v", k)
	}
}
