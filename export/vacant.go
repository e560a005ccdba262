package export

// Vacant reports why a set cannot be begun in a folder, as [Create] would, but
// changes nothing: it holds a set already, or something else. A folder that is
// not there yet is vacant, and so is one that holds an unfinished set.
func Vacant(dir string) error {
	exists, err := isFolder(dir)
	if !exists || err != nil {
		return err
	}
	_, err = state{dir: dir}.leftovers()
	return err
}
