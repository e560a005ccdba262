package export_test

import (
	"bytes"
	"encoding/json"
	"fmt"
	"maps"
	"os"
	"path"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/parquet/file"

	"strandwise/channels"
	"strandwise/export"
)

// What version 1.1 of the Croissant format requires or states of each class:
// "Croissant Format Specification, Version 1.1", MLCommons, 2026-01-29
// (http://mlcommons.org/croissant/1.1), sections "Required", "Modified and Added
// Properties", "FileObject", "FileSet", "RecordSet" and "Field". Of files and
// fields the specification lists properties without calling them required; those
// here are the ones its own examples never leave out, and the checksum that it
// strongly recommends.
var (
	datasetRequires = []string{"@context", "@type", "conformsTo", "description", "license", "name", "url", "creator", "datePublished", "distribution"}
	classRequires   = map[string][]string{
		"cr:FileObject": {"@id", "name", "contentUrl", "contentSize", "encodingFormat", "sha256"},
		"cr:FileSet":    {"@id", "name", "includes", "encodingFormat"},
		"cr:RecordSet":  {"@id", "name", "field", "key"},
		"cr:Field":      {"@id", "name", "dataType"},
	}
	// The atomic types of section "DataType", and the classes of sections
	// "Splits" and "Label Data".
	legalTypes = []string{"sc:Text", "sc:Integer", "sc:Float", "cr:Label", "cr:Split", "sc:Enumeration"}
)

var told = export.About{
	Title: "Cues of the Lantern Street theatre", Creator: "Lantern Street Puppet Theatre",
	Licence: "https://spdx.org/licenses/CC-BY-4.0.html", URL: "https://example.org/cues", Published: "2026-12-01",
}

// described writes a set of all tables and returns its croissant.json.
func described(t *testing.T, o export.Options) (dir string, doc map[string]any) {
	t.Helper()
	l := wristband(t)
	dir = t.TempDir()
	o.Tables = export.AllTables()
	write(t, dir, l, o, troupe(l, 2))
	text, err := os.ReadFile(filepath.Join(dir, "croissant.json"))
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &doc); err != nil {
		t.Fatal(err)
	}
	return dir, doc
}

func TestCroissantRequiredProperties(t *testing.T) {
	o := both()
	o.About = told
	_, doc := described(t, o)
	for _, key := range datasetRequires {
		if doc[key] == nil || doc[key] == "" {
			t.Errorf("the data set lacks %s", key)
		}
	}
	if doc["@type"] != "sc:Dataset" || doc["conformsTo"] != "http://mlcommons.org/croissant/1.1" || doc["name"] != told.Title || doc["datePublished"] != told.Published {
		t.Errorf("head %v, %v, %v, %v", doc["@type"], doc["conformsTo"], doc["name"], doc["datePublished"])
	}
	seen := map[string]int{}
	eachNode(doc, func(n map[string]any) {
		class, _ := n["@type"].(string)
		seen[class]++
		for _, key := range classRequires[class] {
			if n[key] == nil || n[key] == "" {
				t.Errorf("%s %v lacks %s", class, n["@id"], key)
			}
		}
	})
	for class := range classRequires {
		if seen[class] == 0 {
			t.Errorf("no %s", class)
		}
	}
	if seen["sc:Organization"] != 1 {
		t.Error("no creator")
	}
}

// TestCroissantSaysWhatIsMissing: what nobody stated is left out and named.
func TestCroissantSaysWhatIsMissing(t *testing.T) {
	_, doc := described(t, both())
	for _, key := range []string{"creator", "license", "url", "datePublished"} {
		if doc[key] != nil {
			t.Errorf("%s is %v, which nobody stated", key, doc[key])
		}
	}
	if got := (export.About{}).Missing(); !slices.Equal(got, []string{"creator", "licence", "url", "published"}) {
		t.Errorf("missing %v", got)
	}
	if got := told.Missing(); len(got) > 0 {
		t.Errorf("missing %v", got)
	}
}

// eachNode visits every object of a JSON-LD document but its context and what is
// embedded as plain JSON.
func eachNode(v any, visit func(map[string]any)) {
	switch v := v.(type) {
	case map[string]any:
		visit(v)
		for key, inner := range v {
			if key != "@context" && key != "data" {
				eachNode(inner, visit)
			}
		}
	case []any:
		for _, inner := range v {
			eachNode(inner, visit)
		}
	}
}

// TestCroissantIdsAndReferences: ids are unique, references lead to one, and
// types are legal.
func TestCroissantIdsAndReferences(t *testing.T) {
	_, doc := described(t, both())
	ids := map[string]bool{}
	eachNode(doc, func(n map[string]any) {
		if id, ok := n["@id"].(string); ok && len(n) > 1 {
			if ids[id] {
				t.Errorf("id %s stands twice", id)
			}
			ids[id] = true
		}
		for _, typ := range texts(n["dataType"]) {
			if !slices.Contains(legalTypes, typ) {
				t.Errorf("%v has the type %s", n["@id"], typ)
			}
		}
		if (n["arrayShape"] != nil) != (n["isArray"] == true) {
			t.Errorf("%v: isArray %v, arrayShape %v", n["@id"], n["isArray"], n["arrayShape"])
		}
	})
	eachNode(doc, func(n map[string]any) {
		if id, ok := n["@id"].(string); ok && len(n) == 1 && !ids[id] {
			t.Errorf("nothing has the id %s that is referred to", id)
		}
	})
}

// texts returns the one text or the texts of a property.
func texts(v any) []string {
	var out []string
	switch v := v.(type) {
	case string:
		out = append(out, v)
	case []any:
		for _, e := range v {
			out = append(out, e.(string))
		}
	}
	return out
}

// TestCroissantTermsAreDefined: every property without a prefix is one of
// schema.org's that this file uses, or defined in the context.
func TestCroissantTermsAreDefined(t *testing.T) {
	o := both()
	o.About = told
	_, doc := described(t, o)
	schemaOrg := []string{"name", "description", "keywords", "distribution", "usageInfo", "creator", "license", "url", "datePublished", "encodingFormat", "contentUrl", "contentSize", "sha256", "unitText"}
	context := doc["@context"].(map[string]any)
	eachNode(doc, func(n map[string]any) {
		for key := range n {
			if !strings.HasPrefix(key, "@") && context[key] == nil && !slices.Contains(schemaOrg, key) {
				t.Errorf("property %s is defined nowhere", key)
			}
		}
	})
}

// TestCroissantFiles: the files are those of the set, with their checksums, and
// each table's set of files holds exactly its files.
func TestCroissantFiles(t *testing.T) {
	dir, doc := described(t, both())
	files := tree(t, dir)
	maps.DeleteFunc(files, func(name, _ string) bool { return strings.HasSuffix(name, "/") }) // folders
	stated := map[string]bool{"manifest.json": true, "croissant.json": true}                  // which cannot state themselves
	for _, f := range classOf(doc, "cr:FileObject") {
		name := f["contentUrl"].(string)
		stated[name] = true
		if f["sha256"] != sha(files[name]) || f["contentSize"] != fmt.Sprintf("%d B", len(files[name])) {
			t.Errorf("%s: %v, %v", name, f["sha256"], f["contentSize"])
		}
	}
	if got, want := slices.Sorted(maps.Keys(stated)), slices.Sorted(maps.Keys(files)); !slices.Equal(got, want) {
		t.Errorf("files %v, want %v", got, want)
	}
	held := map[string]bool{}
	for _, s := range classOf(doc, "cr:FileSet") {
		for name := range files {
			if match, err := path.Match(s["includes"].(string), name); err != nil {
				t.Fatal(err)
			} else if match {
				held[name] = true
				if s["@id"] != strings.Split(name, "/")[0]+"-files" {
					t.Errorf("%s is held by %v", name, s["@id"])
				}
			}
		}
	}
	for name := range files {
		if held[name] != strings.HasSuffix(name, ".parquet") {
			t.Errorf("%s: in a set of files: %v", name, held[name])
		}
	}
}

func classOf(doc map[string]any, class string) []map[string]any {
	var out []map[string]any
	eachNode(doc, func(n map[string]any) {
		if n["@type"] == class {
			out = append(out, n)
		}
	})
	return out
}

// TestCroissantColumns: the fields of each table are exactly its columns, plus
// the split, which the rule finds in every path.
func TestCroissantColumns(t *testing.T) {
	dir, doc := described(t, both())
	for _, r := range classOf(doc, "cr:RecordSet") {
		table := r["@id"].(string)
		if table == "splits" || table == "labels" {
			continue
		}
		var stated []string
		for _, f := range r["field"].([]any) {
			source := f.(map[string]any)["source"].(map[string]any)
			extract := source["extract"].(map[string]any)
			if column, ok := extract["column"].(string); ok {
				stated = append(stated, column)
				continue
			}
			rule := regexp.MustCompile(source["transform"].(map[string]any)["regex"].(string))
			for name := range tree(t, dir) {
				if m := rule.FindStringSubmatch(name); strings.HasSuffix(name, ".parquet") && (m == nil || !strings.Contains(name, "split="+m[1]+"/")) {
					t.Errorf("the rule finds no split in %s", name)
				}
			}
		}
		f, err := file.OpenParquetFile(firstPart(t, dir, export.Table(table), "train"), false)
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		var columns []string
		root := f.MetaData().Schema.Root()
		for i := range root.NumFields() {
			columns = append(columns, root.Field(i).Name())
		}
		if !slices.Equal(stated, columns) {
			t.Errorf("table %s: columns %v, the description says %v", table, columns, stated)
		}
	}
}

func TestCroissantUnitsSplitsAndLabels(t *testing.T) {
	o := both()
	o.Windowing = export.Windowing{Length: 12}
	_, doc := described(t, o)
	fields := map[string]map[string]any{}
	for _, f := range classOf(doc, "cr:Field") {
		fields[f["@id"].(string)] = f
	}
	for id, want := range map[string]map[string]any{
		"takes/left_wrist.accel.x":   {"unitText": "m/s^2", "arrayShape": "-1"},
		"frames/left_wrist.gyro.z":   {"unitText": "rad/s", "arrayShape": nil},
		"windows/left_wrist.accel.y": {"unitText": "m/s^2", "arrayShape": "12"},
		"takes/rate_hz":              {"unitText": "Hz"},
		"takes/label":                {"unitText": nil},
	} {
		for key, v := range want {
			if fields[id][key] != v {
				t.Errorf("field %s: %s is %v, want %v", id, key, fields[id][key], v)
			}
		}
	}
	if got := texts(fields["takes/label"]["dataType"]); !slices.Equal(got, []string{"sc:Text", "cr:Label"}) {
		t.Errorf("labels are of type %v", got)
	}
	for _, r := range classOf(doc, "cr:RecordSet") {
		text, err := json.Marshal(r["data"])
		if err != nil {
			t.Fatal(err)
		}
		switch r["@id"] {
		case "splits":
			if want := `[{"splits/name":"test","splits/url":"cr:TestSplit"},{"splits/name":"train","splits/url":"cr:TrainingSplit"}]`; string(text) != want {
				t.Errorf("splits %s, want %s", text, want)
			}
		case "labels":
			if want := `[{"labels/name":"curtain"},{"labels/name":"spotlight"}]`; string(text) != want {
				t.Errorf("labels %s, want %s", text, want)
			}
		}
	}
}

// TestCroissantOfOddNames: names that are no part of a reference are written so
// that they are one.
func TestCroissantOfOddNames(t *testing.T) {
	l := &channels.Layout{Channels: []channels.Channel{{Name: "x y/z <é>"}}}
	dir := t.TempDir()
	write(t, dir, l, export.Options{}, []*channels.Take{{ID: "a", Label: `"q"`, Layout: l, Time: []float64{0, 1}, Data: []float64{1, 2}}})
	text := tree(t, dir)["croissant.json"]
	if !json.Valid([]byte(text)) || !strings.Contains(text, `"takes/x%20y%2Fz%20%3C%C3%A9%3E"`) || !strings.Contains(text, `"column": "x y/z <é>"`) {
		t.Errorf("croissant.json:\n%s", text)
	}
}

func TestAboutIsChecked(t *testing.T) {
	for _, tc := range []struct {
		about export.About
		says  string
	}{
		{export.About{Licence: "CC-BY-4.0"}, "is no URL"},
		{export.About{URL: "set/"}, "is no URL"},
		{export.About{Published: "1 December"}, "is no date"},
	} {
		if err := tc.about.Validate(); err == nil || !strings.Contains(err.Error(), tc.says) {
			t.Errorf("%+v: error %v, want one with %q", tc.about, err, tc.says)
		}
		if _, err := export.Create(t.TempDir()+"/set", wristband(t), export.Options{About: tc.about}); err == nil {
			t.Errorf("%+v: a set was begun", tc.about)
		}
	}
	if err := told.Validate(); err != nil {
		t.Error(err)
	}
}

// TestDescriptionsAreRepeatable: the same set is described in the same bytes.
func TestDescriptionsAreRepeatable(t *testing.T) {
	a, _ := described(t, both())
	b, _ := described(t, both())
	for _, name := range []string{"CARD.md", "croissant.json"} {
		one, two := tree(t, a)[name], tree(t, b)[name]
		if one == "" || !bytes.Equal([]byte(one), []byte(two)) {
			t.Errorf("%s differs, or is empty", name)
		}
	}
}
