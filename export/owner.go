package export

import (
	"path/filepath"
	"slices"
	"strings"
)

// owner knows which files and folders of an unfinished set are a writer's own.
type owner struct {
	planned  bool            // the plan of the set is there
	attached map[string]bool // what its records call attached
}

// owns reports whether a path inside the folder, with slashes, is one that a
// writer makes. Without a plan that is only the plan's temporary file: nothing
// else is made before the plan is in place.
func (o owner) owns(name string, folder bool) bool {
	whole, partly := final(name)
	if partly && folder {
		return false
	}
	if !o.planned {
		return partly && whole == planName
	}
	if strings.HasPrefix(name, stateFolder+"/") {
		return !folder && isRecord(whole)
	}
	parts := strings.Split(whole, "/")
	if len(parts) > 1 || folder {
		return belongsToTable(parts, folder)
	}
	return o.attached[whole] || isDescription(whole) || partly && whole == manifestName
}

// isRecord reports whether a name is one of the records of an unfinished set.
func isRecord(name string) bool {
	rest, inside := strings.CutPrefix(name, stateFolder+"/")
	if !inside || strings.Contains(rest, "/") {
		return false
	}
	bucket, err := filepath.Match("bucket-[0-9]*.json", rest)
	return err == nil && bucket || name == notesName || name == planName || strings.HasPrefix(name, attachmentPrefix)
}

// belongsToTable reports whether the parts of a path are a table's folder or
// one of its files.
func belongsToTable(parts []string, folder bool) bool {
	if !slices.Contains(AllTables(), Table(parts[0])) || len(parts) > 3 || folder != (len(parts) < 3) {
		return false
	}
	if len(parts) > 1 && !slices.Contains([]string{"split=train", "split=test"}, parts[1]) {
		return false
	}
	if len(parts) < 3 {
		return true
	}
	matched, err := filepath.Match("part-[0-9]*.parquet", parts[2])
	return err == nil && matched
}
