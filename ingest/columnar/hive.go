package columnar

import (
	"net/url"
	"path/filepath"
	"strings"

	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// hiveNull is how a folder states that a partition has no value (Apache Hive).
const hiveNull = "__HIVE_DEFAULT_PARTITION__"

// hive reads identity from the folders named key=value right above a file, as
// Apache Hive names the parts of a partitioned table, percent signs escaping
// other characters.
func hive(in raw.Input) (id raw.Identity) {
	path, err := filepath.Abs(in.Path)
	if in.Name == "-" || in.Path == "" || err != nil {
		return id
	}
	for dir := filepath.Dir(path); ; dir = filepath.Dir(dir) {
		key, value, ok := strings.Cut(filepath.Base(dir), "=")
		if !ok {
			return id
		}
		plain, err := url.PathUnescape(value)
		if err != nil {
			plain = value
		}
		if f := id.Field(table.Key(key)); f != nil && *f == "" && plain != hiveNull {
			*f = plain
		}
	}
}
