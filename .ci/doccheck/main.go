// Command doccheck reports every package without a package comment and every
// exported identifier without a doc comment in the folders named.
package main

import (
	"fmt"
	"go/ast"
	"go/doc"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

func main() {
	missing := 0
	for _, root := range os.Args[1:] {
		err := filepath.WalkDir(root, func(path string, e fs.DirEntry, err error) error {
			if err != nil || !e.IsDir() {
				return err
			}
			if strings.HasPrefix(e.Name(), ".") && path != root || e.Name() == "testdata" {
				return fs.SkipDir
			}
			n, err := check(path)
			missing += n
			return err
		})
		if err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
	}
	if missing > 0 {
		fmt.Fprintf(os.Stderr, "%d exported identifiers or packages without documentation\n", missing)
		os.Exit(1)
	}
}

// check reports what lacks documentation in one folder.
func check(dir string) (int, error) {
	files, set, err := parse(dir)
	if err != nil || len(files) == 0 {
		return 0, err
	}
	p, err := doc.NewFromFiles(set, files, dir)
	if err != nil {
		return 0, err
	}
	c := &checker{set: set}
	if strings.TrimSpace(p.Doc) == "" {
		c.report(files[0].Package, "package "+p.Name)
	}
	if p.Name != "main" {
		c.values(p.Consts, p.Vars)
		c.funcs(p.Funcs)
		for _, t := range p.Types {
			c.typ(t)
		}
	}
	return c.missing, nil
}

func parse(dir string) ([]*ast.File, *token.FileSet, error) {
	set := token.NewFileSet()
	names, err := filepath.Glob(filepath.Join(dir, "*.go"))
	if err != nil {
		return nil, nil, err
	}
	var files []*ast.File
	for _, name := range names {
		if strings.HasSuffix(name, "_test.go") {
			continue
		}
		f, err := parser.ParseFile(set, name, nil, parser.ParseComments)
		if err != nil {
			return nil, nil, err
		}
		files = append(files, f)
	}
	return files, set, nil
}

type checker struct {
	set     *token.FileSet
	missing int
}

func (c *checker) report(at token.Pos, what string) {
	fmt.Printf("%s: %s has no documentation\n", c.set.Position(at), what)
	c.missing++
}

// values checks constants and variables: a group needs one comment, or each
// line its own.
func (c *checker) values(groups ...[]*doc.Value) {
	for _, group := range groups {
		for _, v := range group {
			if v.Doc != "" {
				continue
			}
			for _, s := range v.Decl.Specs {
				spec := s.(*ast.ValueSpec)
				if spec.Doc.Text() == "" && spec.Comment.Text() == "" && spec.Names[0].IsExported() {
					c.report(spec.Pos(), spec.Names[0].Name)
				}
			}
		}
	}
}

func (c *checker) funcs(list []*doc.Func) {
	for _, f := range list {
		if f.Doc == "" {
			c.report(f.Decl.Pos(), f.Name)
		}
	}
}

func (c *checker) typ(t *doc.Type) {
	if t.Doc == "" {
		c.report(t.Decl.Pos(), t.Name)
	}
	c.values(t.Consts, t.Vars)
	c.funcs(t.Funcs)
	c.funcs(t.Methods)
}
