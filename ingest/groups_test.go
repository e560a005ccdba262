package ingest_test

import (
	"bytes"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest"
)

// grouped returns a table of frames whose metadata state these groups of its
// channels c0 to c3.
func grouped(t *testing.T, groups string) string {
	t.Helper()
	type row struct {
		Take  string  `parquet:"take"`
		TimeS float64 `parquet:"time_s"`
		C0    float32 `parquet:"c0"`
		C1    float32 `parquet:"c1"`
		C2    float32 `parquet:"c2"`
		C3    float32 `parquet:"c3"`
	}
	const layout = `{"format":"strandwise.layout/1","table":"frames","channels":[
		{"name":"c0","column":"c0","quantity":"MISC"},{"name":"c1","column":"c1","quantity":"MISC"},
		{"name":"c2","column":"c2","quantity":"MISC"},{"name":"c3","column":"c3","quantity":"MISC"}],"groups":`
	var out bytes.Buffer
	w := parquet.NewGenericWriter[row](&out, parquet.KeyValueMetadata("strandwise.layout", layout+groups+"}"))
	if _, err := w.Write([]row{{"a", 0, 1, 2, 3, 4}, {"a", 0.5, 2, 3, 4, 6}}); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.String()
}

// TestStatedGroups reads a file that groups its channels as their names do not.
// The groups hold when they hold every channel once.
func TestStatedGroups(t *testing.T) {
	const sides = `[{"name":"left","limb":"arm","channels":["c3","c0"]},{"name":"right","limb":"","channels":["c1","c2"]}]`
	byName := func(n int) []channels.Group { // all that the names say
		g := channels.Group{Name: "c0-c3", Limb: "all"}
		for i := range n {
			g.Channels = append(g.Channels, i)
		}
		return []channels.Group{g}
	}
	for _, c := range []struct {
		name, groups string
		leaveOut     []string
		rules        []group.Rule
		want         []channels.Group
	}{
		{"as stated", sides, nil, nil,
			[]channels.Group{{Name: "left", Limb: "arm", Channels: []int{0, 3}}, {Name: "right", Limb: "right", Channels: []int{1, 2}}}},
		{"a channel left out", sides, []string{"c0"}, nil,
			[]channels.Group{{Name: "left", Limb: "arm", Channels: []int{2}}, {Name: "right", Limb: "right", Channels: []int{0, 1}}}},
		{"a group left out", sides, []string{"c1", "c2"}, nil, []channels.Group{{Name: "left", Limb: "arm", Channels: []int{0, 1}}}},
		{"the rules of the user hold", sides, nil, []group.Rule{{Name: "odd", Channels: []string{"c1", "c3"}}, {Name: "even", Channels: []string{"c0", "c2"}}},
			[]channels.Group{{Name: "odd", Limb: "odd", Channels: []int{1, 3}}, {Name: "even", Limb: "even", Channels: []int{0, 2}}}},
		{"none", `[]`, nil, nil, byName(4)},
		{"a channel in no group", `[{"name":"left","limb":"arm","channels":["c0","c1","c2"]}]`, nil, nil, byName(4)},
		{"a channel in two groups", `[{"name":"left","channels":["c0","c1"]},{"name":"right","channels":["c1","c2","c3"]}]`, nil, nil, byName(4)},
		{"a channel twice in a group", `[{"name":"left","channels":["c0","c0","c1","c2","c3"]}]`, nil, nil, byName(4)},
		{"a channel that is not there", `[{"name":"left","channels":["c0","c1","c2","c3","c4"]}]`, nil, nil, byName(4)},
		{"a group without a name", `[{"name":"","channels":["c0","c1","c2","c3"]}]`, nil, nil, byName(4)},
		{"two groups without the channel they share", `[{"name":"left","channels":["c0","c1"]},{"name":"right","channels":["c1","c2","c3"]}]`, []string{"c1"}, nil,
			[]channels.Group{{Name: "left", Limb: "left", Channels: []int{0}}, {Name: "right", Limb: "right", Channels: []int{1, 2}}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := write(t, map[string]string{"a.parquet": grouped(t, c.groups)})
			takes, _, err := read(t, ingest.Options{Paths: []string{filepath.Join(dir, "a.parquet")}, Label: "wave", LeaveOut: c.leaveOut, Groups: c.rules})
			if err != nil || len(takes) != 1 {
				t.Fatalf("%d takes, error %v", len(takes), err)
			}
			if d := cmp.Diff(c.want, takes[0].Layout.Groups); d != "" {
				t.Error(d)
			}
		})
	}
}
