package export

import (
	"cmp"
	"hash/maphash"
	"maps"
	"slices"
	"strings"

	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
)

// compare reports what only the whole set can show.
func (c *content) compare(v *Verification) {
	if c.partial {
		return
	}
	c.compareSources(v)
	c.compareCounts(v)
	c.compareIDs(v)
}

func (c *content) compareSources(v *Verification) {
	var lost []source
	for h, s := range c.sources {
		if !c.recorded[h] {
			lost = append(lost, s)
		}
	}
	slices.SortFunc(lost, func(a, b source) int { return cmp.Compare(a.name, b.name) })
	for _, s := range lost {
		v.problem(s.file, "take %s has the source %s, which is no recorded take in the split train", s.take, s.name)
	}
}

func (c *content) compareCounts(v *Verification) {
	stated := counts{}
	for _, n := range c.manifest.Counts {
		stated[countKey{n.Split, n.Label, n.Origin}] = &n
		c.counts.add(n.Split, n.Label, n.Origin, 0, 0)
	}
	for _, found := range c.counts.list() {
		says := stated[countKey{found.Split, found.Label, found.Origin}]
		if says == nil {
			says = &Count{}
		}
		if says.Takes != found.Takes || says.Frames != found.Frames {
			v.problem(manifestName, "split %s, label %s, %s: it says %d takes of %d frames, the table has %d of %d",
				found.Split, found.Label, found.Origin, says.Takes, says.Frames, found.Takes, found.Frames)
		}
	}
	c.compareWindows(v)
	for _, split := range []channels.Split{channels.Train, channels.Test} {
		rows, frames := c.rows[tableKey{Frames, split}], c.frames(split)
		if c.hasFrames() && rows != frames {
			v.problem(manifestName, "split %s has %d frames in the takes and %d rows in the table frames", split, frames, rows)
		}
	}
}

// hasFrames reports whether the set holds the table frames.
func (c *content) hasFrames() bool {
	return slices.ContainsFunc(c.manifest.Files, func(f File) bool { return strings.HasPrefix(f.Path, string(Frames)+"/") })
}

func (c *content) frames(split channels.Split) int64 {
	var n int64
	for key, count := range c.counts {
		if key.split == split {
			n += count.Frames
		}
	}
	return n
}

// compareIDs reports ids that stand in more than one row. Rows that share a
// hash are read again, so that only equal texts are reported.
func (c *content) compareIDs(v *Verification) {
	slices.Sort(c.ids)
	shared := map[uint64]bool{}
	for i := 1; i < len(c.ids); i++ {
		if c.ids[i] == c.ids[i-1] {
			shared[c.ids[i]] = true
		}
	}
	if len(shared) == 0 {
		return
	}
	files := map[string][]string{} // of each suspected id
	for _, f := range c.manifest.Files {
		if key, err := placeOf(f.Path); err != nil || key.table != Takes {
			continue
		}
		err := c.open(f, func(p *parquet.File) error { return c.collect(p, f.Path, shared, files) })
		if err != nil {
			v.problem(f.Path, "%v", err)
		}
	}
	for _, id := range slices.Sorted(maps.Keys(files)) {
		if in := files[id]; len(in) > 1 {
			v.problem(in[1], "take %s stands in %d rows; the first is in %s", id, len(in), in[0])
		}
	}
}

// collect adds the file to the list of every suspected id, once per row.
func (c *content) collect(p *parquet.File, path string, shared map[uint64]bool, files map[string][]string) error {
	for _, g := range p.RowGroups() {
		ids, err := readColumn(g, "id", parquet.ByteArray)
		if err != nil {
			return err
		}
		for _, id := range ids {
			if name := id.String(); shared[maphash.String(c.seed, name)] {
				files[name] = append(files[name], path)
			}
		}
	}
	return nil
}
