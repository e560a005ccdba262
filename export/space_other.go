//go:build !(darwin || linux)

package export

// Free returns the bytes that this user may still write to the file system that
// holds a folder; known is false where the system does not say.
func Free(string) (bytes int64, known bool) { return 0, false }
