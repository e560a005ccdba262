package report

import "strings"

// origin is the section on where the set came from.
type origin struct {
	Program    string
	Seed       string
	Command    string
	Plan       string
	Recordings *table
	Files      *table
	NoFiles    string
}

func (b *builder) origin() origin {
	p := b.in.Provenance
	return origin{
		Program: visible(p.Program), Seed: decimal(p.Seed), Command: visible(strings.TrimSpace(p.Command)), Plan: visible(strings.TrimSpace(p.Plan)),
		Recordings: files("Recordings that were read", p.Recordings), Files: files("Files of the set", p.Files),
	}
}

// files lists files with their hashes; nil for none.
func files(caption string, list []File) *table {
	if len(list) == 0 {
		return nil
	}
	t := &table{Caption: caption, Head: []string{"file", "size", "SHA-256"}}
	for _, f := range list {
		t.add(pathCell(f.Path), figures(plainBytes(f.Bytes)), cell{Text: f.SHA256, Mono: true})
	}
	return t
}

// mostOfPath is how many characters of a path are shown.
const mostOfPath = 300

func pathCell(path string) cell {
	n := named(path, "standard input")
	if n.Full != "" {
		n = name{Short: shortened(path, mostOfPath)}
	}
	return cell{Name: &n}
}
