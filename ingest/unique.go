package ingest

import (
	"fmt"
	"hash/fnv"

	"strandwise/ingest/fault"
)

// register remembers where each take began, to notice one that comes again.
//
// It keeps 16 bytes per take (a 64-bit hash of the id, the file's index and
// the line); with the table around them that is 20 to 40 bytes, whatever the
// length of the id. Two ids of one hash would be taken for one take: with a
// million takes the chance is below 3 in 10^8.
type register map[uint64]place

type place struct{ file, line uint32 }

// enter remembers a take and reports an earlier one of the same id.
func (r register) enter(id string, file, line int) (earlier place, again bool) {
	h := fnv.New64a()
	h.Write([]byte(id))
	key := h.Sum64()
	if earlier, again = r[key]; !again {
		r[key] = place{uint32(file), uint32(line)}
	}
	return earlier, again
}

// repeated is the fault of a take that comes again.
func repeated(id string, first source, firstLine int, now source, line int) error {
	e := &fault.Error{
		File: now.name, Line: line, Take: id,
		Problem: fmt.Sprintf("comes again; it began at %s", where(first.name, firstLine)),
		Remedy:  "sort the rows so that each take stands together, or name its parts as takes of their own",
	}
	if first.name != now.name {
		e.Remedy = "name the takes apart, or give a --pattern that reads part of their names from the path"
	}
	return e
}

// where gives a place in a file as "file:line".
func where(file string, line int) string {
	if line == 0 {
		return file
	}
	return fmt.Sprintf("%s:%d", file, line)
}
