// Command deploy reads deployment files as those that carry them out would:
// Kubernetes files field by field as the types of its API, where an unknown or
// misplaced field is an error, and Dockerfiles by the parser and the linter of
// the program that builds images.
//
//	go run . FILE …
package main

import (
	"bytes"
	"errors"
	"fmt"
	"log"
	"os"
	"path/filepath"
	"strings"

	"github.com/moby/buildkit/frontend/dockerfile/instructions"
	"github.com/moby/buildkit/frontend/dockerfile/linter"
	"github.com/moby/buildkit/frontend/dockerfile/parser"
	batch "k8s.io/api/batch/v1"
	"sigs.k8s.io/yaml"
)

func main() {
	log.SetFlags(0)
	var errs []error
	for _, file := range os.Args[1:] {
		if err := check(file); err != nil {
			errs = append(errs, fmt.Errorf("%s: %w", file, err))
		}
	}
	if len(os.Args) == 1 {
		errs = append(errs, errors.New("no files are named"))
	}
	if err := errors.Join(errs...); err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%d files are as they should be\n", len(os.Args)-1)
}

func check(file string) error {
	text, err := os.ReadFile(file)
	if err != nil {
		return err
	}
	if strings.HasPrefix(filepath.Base(file), "Dockerfile") {
		return dockerfile(text)
	}
	return job(text)
}

// dockerfile returns what the linter has to say, all of it being an error.
func dockerfile(text []byte) error {
	parsed, err := parser.Parse(bytes.NewReader(text))
	if err != nil {
		return err
	}
	var errs []error
	warn := func(rule, _, _, message string, place []parser.Range) {
		errs = append(errs, fmt.Errorf("line %d: %s: %s", place[0].Start.Line, rule, message))
	}
	for _, w := range parsed.Warnings {
		errs = append(errs, errors.New(w.Short))
	}
	if _, _, err := instructions.Parse(parsed.AST, linter.New(&linter.Config{Warn: warn})); err != nil {
		errs = append(errs, err)
	}
	return errors.Join(errs...)
}

// job reads a Kubernetes Job.
func job(text []byte) error {
	var j batch.Job
	if err := yaml.UnmarshalStrict(text, &j); err != nil {
		return err
	}
	if j.APIVersion != "batch/v1" || j.Kind != "Job" {
		return fmt.Errorf("it is a %s of %s, not a Job of batch/v1", j.Kind, j.APIVersion)
	}
	pod := j.Spec.Template.Spec
	if n := len(pod.Containers); n != 1 {
		return fmt.Errorf("it has %d containers, not 1", n)
	}
	volumes := map[string]bool{}
	for _, v := range pod.Volumes {
		volumes[v.Name] = true
	}
	for _, m := range pod.Containers[0].VolumeMounts {
		if !volumes[m.Name] {
			return fmt.Errorf("volume %s is mounted but not there", m.Name)
		}
	}
	return nil
}
