package export_test

import (
	"bytes"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
	"strandwise/export"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// tiny writes a set small enough to be read by eye, of numbers that are exact
// on every machine.
func tiny(t testing.TB, dir string) *export.Manifest {
	t.Helper()
	l := &channels.Layout{Channels: []channels.Channel{
		{Name: "left_wrist.accel.x", TrackedPoint: "left_wrist", Quantity: channels.Acceleration, Component: "x", Unit: "m/s^2"},
		{Name: "label", Quantity: channels.Misc},
	}}
	l, err := l.WithGroups([]channels.Group{{Name: "left_wrist.accel", Limb: "left_wrist", Channels: []int{0}}, {Name: "label", Channels: []int{1}}})
	if err != nil {
		t.Fatal(err)
	}
	recorded := &channels.Take{
		ID: "ada-curtain-1", Label: "curtain", Subject: "ada", Session: "dress rehearsal", Split: channels.Train,
		Layout: l, Time: []float64{2, 2.5, 3}, Data: []float64{0, 1, 0.25, 1, 0.5, 2},
	}
	made := *recorded
	made.ID, made.Data = "ada-curtain-1~000", []float64{0, 1, 0.5, 1, 0.75, 2}
	made.Made = &channels.Making{Source: recorded.ID, Method: "combined", Parameters: map[string]float64{"trim_start_s": 0.125, "amplitude": 1.5}}
	held := *recorded
	held.ID, held.Subject, held.Split = "bo-curtain-1", "bo", channels.Test
	return write(t, dir, l, export.Options{
		Tables: export.AllTables(), Version: "0.1.0", Seed: 1<<64 - 1, Plan: []byte(`{"reach":1,"labels":["<curtain>"]}`),
		Recordings: []export.Recording{{Path: "recordings/ada.csv", Bytes: 120, SHA256: sha("ada")}},
	}, []*channels.Take{recorded, &made, &held})
}

// TestGoldenManifest holds the manifest, and through its checksums every byte
// of the set, against a file. Rewrite it with
//
//	go test -run GoldenManifest ./export -update
func TestGoldenManifest(t *testing.T) {
	dir := t.TempDir()
	tiny(t, dir)
	got := tree(t, dir)["manifest.json"]
	golden := filepath.Join("testdata", "manifest.json")
	if *update {
		put(t, golden, got)
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(want), got); diff != "" {
		t.Errorf("manifest (-golden +got):\n%s", diff)
	}
}

// TestManifestReadsBack: Seal returns what ReadManifest reads.
func TestManifestReadsBack(t *testing.T) {
	dir := t.TempDir()
	want := tiny(t, dir)
	got, err := export.ReadManifest(dir)
	if err != nil {
		t.Fatal(err)
	}
	var plan bytes.Buffer // the file has it indented
	for _, r := range string(got.Plan) {
		if !strings.ContainsRune(" \n", r) {
			plan.WriteRune(r)
		}
	}
	got.Plan = plan.Bytes()
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("manifest (-sealed +read):\n%s", diff)
	}
	if r, s := got.Takes(channels.Recorded), got.Takes(channels.Synthetic); r != 2 || s != 1 {
		t.Errorf("%d recorded and %d synthetic takes, want 2 and 1", r, s)
	}
}

// TestManifestOfAnotherFormat: a manifest that is sealed, but not ours to read.
func TestManifestOfAnotherFormat(t *testing.T) {
	dir := t.TempDir()
	tiny(t, dir)
	if err := export.Reseal(dir, func(m *export.Manifest) { m.Format = "strandwise.set/2" }); err != nil {
		t.Fatal(err)
	}
	_, err := export.ReadManifest(dir)
	if err == nil || !strings.Contains(err.Error(), `format "strandwise.set/2" is not "strandwise.set/1"`) {
		t.Errorf("error %v, want one that names both formats", err)
	}
	if _, err := export.Verify(dir); err == nil {
		t.Error("Verify: no error")
	}
}

// TestBytesDependOnlyOnTakes writes the same takes into folders of other names
// at other times: every file is the same.
func TestBytesDependOnlyOnTakes(t *testing.T) {
	l := wristband(t)
	root := t.TempDir()
	first, second := filepath.Join(root, "a"), filepath.Join(root, "another", "place")
	write(t, first, l, both(), troupe(l, 5))
	write(t, second, wristband(t), both(), troupe(wristband(t), 5))
	if diff := cmp.Diff(tree(t, first), tree(t, second)); diff != "" {
		t.Errorf("two sets of the same takes differ:\n%s", diff)
	}
	for name, text := range tree(t, first) {
		if strings.Contains(text, root) {
			t.Errorf("%s names the folder it was written in", name)
		}
	}
}

// FuzzReadManifest: whatever stands in the file, reading it ends, and what is
// read was sealed.
func FuzzReadManifest(f *testing.F) {
	dir := f.TempDir()
	tiny(f, dir)
	sealed := tree(f, dir)["manifest.json"]
	f.Add([]byte(sealed))
	f.Add([]byte(sealed[:len(sealed)-1]))
	f.Add([]byte("{}"))
	f.Add([]byte(nil))
	f.Fuzz(func(t *testing.T, data []byte) {
		dir := t.TempDir()
		put(t, filepath.Join(dir, "manifest.json"), string(data))
		if _, err := export.ReadManifest(dir); err == nil && string(data) != sealed {
			t.Errorf("a manifest that nobody sealed is read:\n%s", data)
		}
		if v, err := export.Verify(dir); err == nil && v.Sound() {
			t.Error("a set without files is sound")
		}
	})
}
