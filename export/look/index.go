package look

import (
	"encoding/json"
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/export"
)

// gatePrefix begins the names of parameters that are gate values.
const gatePrefix = "gate_"

// index is who the takes of a set are, without their signals, in the order of
// the files.
type index struct {
	rows     []row
	labels   names
	subjects names
	sessions names
	gates    []string    // names of the gates that any take has a value of
	values   [][]float32 // of each gate, by take; NaN where there is none
	made     [][]int32   // numbers of the synthetic takes by that of their source; nil for none
	skeleton []*body.Skeleton
}

// row is one take.
type row struct {
	id                      string
	label, subject, session uint32
	source                  int32 // number of the source take, -1 for none or one that is not in the set
	draw, rank              int32 // -1 for a recorded take
	frames                  int32
	before                  int32 // frames of the takes before it in its row group
	rate                    float32
	file, group             uint16
	place                   int32 // in its row group
	skeleton                int16 // number of its skeleton, -1 for none
	test, synthetic         bool
}

// names is a list of texts, each once, with the number of takes of each.
type names struct {
	texts []string
	takes []int32
	at    map[string]uint32
}

// of returns the number of a text, which counts one take more.
func (n *names) of(text []byte) uint32 {
	i, ok := n.at[string(text)]
	if !ok {
		if n.at == nil {
			n.at = map[string]uint32{}
		}
		i = uint32(len(n.texts))
		n.texts, n.takes = append(n.texts, string(text)), append(n.takes, 0)
		n.at[n.texts[i]] = i
	}
	n.takes[i]++
	return i
}

// indexing is an index in the making.
type indexing struct {
	*index
	sources names          // the ids that takes name as their source
	of      []int32        // number of that id, by take; -1 for a recorded one
	gate    map[string]int // place of each gate's values
}

// readIndex reads who the takes in these files are.
func readIndex(files []*file) (*index, error) {
	x := &indexing{index: &index{}, gate: map[string]int{}}
	if len(files) > math.MaxUint16 {
		return nil, fmt.Errorf("%d files are too many to look at", len(files))
	}
	for f, from := range files {
		if err := guarded(func() error { return x.addFile(f, from) }); err != nil {
			return nil, fmt.Errorf("%s: %w", from.path, err)
		}
	}
	x.link()
	x.sortGates()
	return x.index, nil
}

func (x *indexing) addFile(f int, from *file) error {
	skeletons, err := x.skeletonsOf(from)
	if err != nil {
		return err
	}
	if len(from.groups) > math.MaxUint16 {
		return fmt.Errorf("%d row groups are too many to look at", len(from.groups))
	}
	for g := range from.groups {
		first := len(x.rows)
		if err := x.addGroup(f, g, from); err != nil {
			return fmt.Errorf("row group %d: %w", g, err)
		}
		for i := first; i < len(x.rows); i++ {
			r := &x.rows[i]
			r.skeleton = -1
			if s, ok := skeletons[r.id]; ok {
				r.skeleton = s
			}
		}
	}
	return nil
}

// skeletonsOf returns the number of the skeleton of each take of a file that has
// one, by id.
func (x *indexing) skeletonsOf(from *file) (map[string]int16, error) {
	text, ok := from.parquet.Lookup(export.SkeletonsKey)
	if !ok {
		return nil, nil
	}
	var list []export.SkeletonTakes
	if err := json.Unmarshal([]byte(text), &list); err != nil {
		return nil, fmt.Errorf("metadata %s: %w", export.SkeletonsKey, err)
	}
	out := map[string]int16{}
	for _, entry := range list {
		if entry.Skeleton == nil || len(x.skeleton) > math.MaxInt16 {
			return nil, fmt.Errorf("metadata %s: takes without a skeleton, or too many skeletons", export.SkeletonsKey)
		}
		if err := entry.Skeleton.Validate(); err != nil {
			return nil, fmt.Errorf("metadata %s: %w", export.SkeletonsKey, err)
		}
		for _, id := range entry.Takes {
			out[id] = int16(len(x.skeleton))
		}
		x.skeleton = append(x.skeleton, entry.Skeleton)
	}
	return out, nil
}

// addGroup adds the takes of one row group.
func (x *indexing) addGroup(f, g int, from *file) error {
	group := from.groups[g]
	c := columns{group: group, rows: int(group.NumRows())}
	id, label, subject, session := c.texts("id"), c.texts("label"), c.texts("subject"), c.texts("session")
	origin, source, parameters := c.texts("origin"), c.texts("source"), c.texts("parameters")
	draw, rank, frames, rate := c.int32s("draw"), c.int32s("rank"), c.int32s("frames"), c.float64s("rate_hz")
	if c.err != nil {
		return c.err
	}
	before := int64(0)
	ids := shared(id)
	for i := range c.rows {
		if frames[i] < 1 || before > math.MaxInt32-int64(frames[i]) {
			return fmt.Errorf("take %d has %d frames after %d", i, frames[i], before)
		}
		x.rows = append(x.rows, row{
			id: ids[i], label: x.labels.of(label[i]), subject: x.subjects.of(subject[i]), session: x.sessions.of(session[i]),
			source: -1, draw: draw[i], rank: rank[i], frames: frames[i], before: int32(before), rate: float32(rate[i]),
			file: uint16(f), group: uint16(g), place: int32(i),
			test: from.split == channels.Test, synthetic: string(origin[i]) == string(channels.Synthetic),
		})
		before += int64(frames[i])
		x.addSource(source[i])
		if err := x.addGates(parameters[i]); err != nil {
			return fmt.Errorf("take %s: parameters: %w", ids[i], err)
		}
	}
	from.frames = append(from.frames, int32(before))
	return nil
}

func (x *indexing) addSource(text []byte) {
	if text == nil {
		x.of = append(x.of, -1)
		return
	}
	x.of = append(x.of, int32(x.sources.of(text)))
}

// addGates takes up the gate values among the parameters of the last take.
func (x *indexing) addGates(text []byte) error {
	for g := range x.values {
		x.values[g] = append(x.values[g], float32(math.NaN()))
	}
	if text == nil {
		return nil
	}
	parameters, err := parseParameters(text)
	for name, v := range parameters {
		gate, ok := strings.CutPrefix(name, gatePrefix)
		if !ok {
			continue
		}
		g, known := x.gate[gate]
		if !known {
			g = len(x.values)
			x.gate[gate] = g
			x.values = append(x.values, slices.Repeat([]float32{float32(math.NaN())}, len(x.rows)))
		}
		x.values[g][len(x.rows)-1] = float32(v)
	}
	return err
}

// parseParameters reads what was drawn for a take.
func parseParameters(text []byte) (map[string]float64, error) {
	var out map[string]float64
	err := json.Unmarshal(text, &out)
	return out, err
}

// link finds the source of every take.
func (x *indexing) link() {
	source := make([]int32, len(x.sources.texts))
	for i := range source {
		source[i] = -1
	}
	for n, r := range x.rows {
		if s, ok := x.sources.at[r.id]; ok && !r.synthetic {
			source[s] = int32(n)
		}
	}
	x.made = make([][]int32, len(x.rows))
	for n := range x.rows {
		if s := x.of[n]; s >= 0 && source[s] >= 0 {
			from := source[s]
			x.rows[n].source = from
			x.made[from] = append(x.made[from], int32(n))
		}
	}
}

// sortGates brings the gates into the order of their names.
func (x *indexing) sortGates() {
	x.gates = slices.Sorted(maps.Keys(x.gate))
	sorted := make([][]float32, len(x.values))
	for i, name := range x.gates {
		sorted[i] = x.values[x.gate[name]]
	}
	x.values = sorted
}

// shared returns texts that stand one after the other in one piece of memory.
func shared(texts [][]byte) []string {
	var b strings.Builder
	for _, t := range texts {
		b.Write(t)
	}
	whole, out := b.String(), make([]string, len(texts))
	for i, t := range texts {
		out[i], whole = whole[:len(t)], whole[len(t):]
	}
	return out
}

// list joins the keys of a map into words.
func list(of map[string]bool) string {
	return strings.Join(slices.Sorted(maps.Keys(of)), " and ")
}
