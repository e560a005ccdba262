package export_test

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/parquet/file"
	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/export"
)

// puppet returns the skeleton of an invented puppet with an arm of this length
// in metres.
func puppet(arm float64) *body.Skeleton {
	return &body.Skeleton{Unit: "cm", Joints: []body.Joint{
		{Name: "Hips", Parent: -1, Freedoms: []body.Freedom{body.MoveX, body.MoveY, body.MoveZ, body.TurnZ, body.TurnX, body.TurnY}},
		{Name: "Arm", Parent: 0, Offset: r3.Vec{Y: 0.1 + 0.2}, Freedoms: []body.Freedom{body.TurnX}},
		{Name: "Arm_end", Parent: 1, Offset: r3.Vec{X: arm}, End: true},
	}}
}

// keyValue returns the metadata under a key of each file of a table, "" where a
// file has none.
func keyValue(t testing.TB, dir string, table export.Table, key string) []string {
	t.Helper()
	parts, err := filepath.Glob(filepath.Join(dir, string(table), "*", "part-*.parquet"))
	if err != nil || len(parts) == 0 {
		t.Fatalf("no files of table %s: %v", table, err)
	}
	var out []string
	for _, path := range parts {
		f, err := file.OpenParquetFile(path, false)
		if err != nil {
			t.Fatal(err)
		}
		text := ""
		if found := f.MetaData().KeyValueMetadata().FindValue(key); found != nil {
			text = *found
		}
		out = append(out, text)
		f.Close()
	}
	return out
}

// TestSkeletons writes takes of two bodies, one of whose skeletons comes as two
// equal copies, and one take of none: all must be found again, each skeleton
// once a file, with the synthetic takes beside their source.
func TestSkeletons(t *testing.T) {
	l := wristband(t)
	takes := troupe(l, 2)
	var want []export.SkeletonTakes
	short, long := puppet(0.5), puppet(0.7)
	for i, take := range takes {
		switch take.Subject {
		case "ada":
			take.Skeleton = short
		case "bo":
			take.Skeleton = []*body.Skeleton{long, puppet(0.7)}[i%2]
		}
	}
	for subject, s := range map[string]*body.Skeleton{"ada": short, "bo": long} {
		entry := export.SkeletonTakes{Skeleton: s}
		for _, take := range takes {
			if take.Subject == subject {
				entry.Takes = append(entry.Takes, take.ID)
			}
		}
		if want = append(want, entry); subject == "ada" && len(want) == 2 {
			want[0], want[1] = want[1], want[0]
		}
	}
	dir := t.TempDir()
	write(t, dir, l, export.Options{Tables: export.AllTables()}, takes)
	texts := keyValue(t, dir, export.Takes, export.SkeletonsKey)
	if len(texts) != 2 || texts[0] != "" {
		t.Fatalf("skeletons in the file of cleo's takes, which have none: %q", texts[0])
	}
	var got []export.SkeletonTakes
	if err := json.Unmarshal([]byte(texts[1]), &got); err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("skeletons (-want +got):\n%s", diff)
	}
	if texts := keyValue(t, dir, export.Frames, export.SkeletonsKey); strings.Join(texts, "") != "" {
		t.Errorf("skeletons in the table frames: %q", texts)
	}
	if v, err := export.Verify(dir); err != nil || !v.Sound() {
		t.Errorf("the set does not verify: %v, %v", v.Problems, err)
	}
}

// TestSkeletonsOfParts: a file lists the takes it holds, and no others.
func TestSkeletonsOfParts(t *testing.T) {
	l := wristband(t)
	takes := troupe(l, 12)
	for _, take := range takes {
		take.Skeleton = puppet(0.5)
	}
	dir := t.TempDir()
	write(t, dir, l, both(), takes)
	var ids []string
	texts := keyValue(t, dir, export.Takes, export.SkeletonsKey)
	for _, text := range texts {
		var got []export.SkeletonTakes
		if err := json.Unmarshal([]byte(text), &got); err != nil || len(got) != 1 {
			t.Fatalf("%d skeletons in a file, error %v", len(got), err)
		}
		ids = append(ids, got[0].Takes...)
	}
	if len(texts) < 3 {
		t.Fatalf("%d files: the test means to see several", len(texts))
	}
	var want []string
	for _, split := range []channels.Split{channels.Test, channels.Train} { // in the order of the folders
		for _, take := range takes {
			if take.Split == split {
				want = append(want, take.ID)
			}
		}
	}
	if diff := cmp.Diff(want, ids); diff != "" {
		t.Errorf("takes of the skeleton (-want +got):\n%s", diff)
	}
}

func TestSkeletonThatIsNone(t *testing.T) {
	l := wristband(t)
	take := troupe(l, 0)[0]
	take.Skeleton = &body.Skeleton{}
	w, err := export.Create(t.TempDir(), l, export.Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer w.Discard()
	if err := w.Add(take); err == nil || !strings.Contains(err.Error(), take.ID) || !strings.Contains(err.Error(), "needs a joint") {
		t.Errorf("error %v, want one that names the take and its skeleton", err)
	}
}
