package puppets_test

import (
	"encoding/csv"
	"flag"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/puppets"
)

var update = flag.Bool("update", false, "rewrite the golden files under testdata")

func TestWriteCSVRoundTrips(t *testing.T) {
	dir := t.TempDir()
	paths, err := puppets.WriteCSV(dir, 3)
	if err != nil {
		t.Fatal(err)
	}
	takes := collect(t, 3)
	if len(paths) != len(takes) || !slices.IsSorted(paths) {
		t.Fatalf("%d paths for %d takes, sorted %t", len(paths), len(takes), slices.IsSorted(paths))
	}
	for i, path := range paths {
		take := takes[i]
		if want := filepath.Join(dir, filepath.FromSlash(take.ID)+".csv"); path != want {
			t.Fatalf("path %s, want %s", path, want)
		}
		header, time, data := parse(t, path)
		want := []string{"time_s"}
		for _, c := range take.Layout.Channels {
			want = append(want, c.Name+" ["+c.Unit+"]")
		}
		if d := cmp.Diff(want, header); d != "" {
			t.Fatalf("%s: header (-want +got):\n%s", path, d)
		}
		if !slices.Equal(time, take.Time) || !slices.Equal(data, take.Data) {
			t.Fatalf("%s: the text does not hold the take's values", path)
		}
	}
}

func parse(t *testing.T, path string) (header []string, time, data []float64) {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows[1:] {
		for k, field := range row {
			v, err := strconv.ParseFloat(field, 64)
			if err != nil {
				t.Fatal(err)
			}
			if k == 0 {
				time = append(time, v)
			} else {
				data = append(data, v)
			}
		}
	}
	return rows[0], time, data
}

// Every path must be read by the pattern in one way, and give back the take.
func TestPatternNamesEveryTake(t *testing.T) {
	expr := regexp.QuoteMeta(puppets.Pattern)
	for _, field := range []string{"subject", "label", "session", "take"} {
		expr = strings.Replace(expr, `\{`+field+`\}`, "(?P<"+field+">[^/_]+)", 1)
	}
	re := regexp.MustCompile("^" + expr + "$")
	for _, take := range collect(t, 1) {
		m := re.FindStringSubmatch(take.ID + ".csv")
		if m == nil {
			t.Fatalf("%s.csv does not fit %s", take.ID, puppets.Pattern)
		}
		if d := cmp.Diff([]string{take.Subject, take.Label, take.Session}, m[1:4]); d != "" {
			t.Errorf("%s (-want +got):\n%s", take.ID, d)
		}
	}
}

func TestWriteCSVReportsAFolderItCannotMake(t *testing.T) {
	file := filepath.Join(t.TempDir(), "taken")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	paths, err := puppets.WriteCSV(file, 1)
	if err == nil || len(paths) != 0 {
		t.Errorf("wrote %d files under a plain file, error %v", len(paths), err)
	}
}

// The recordings must not change unnoticed: others measure on them.
func TestGoldenRecording(t *testing.T) {
	const name = "bobbin/raise-curtain_matinee_1.csv"
	dir := t.TempDir()
	if _, err := puppets.WriteCSV(dir, 1); err != nil {
		t.Fatal(err)
	}
	got, err := os.ReadFile(filepath.Join(dir, filepath.FromSlash(name)))
	if err != nil {
		t.Fatal(err)
	}
	golden := filepath.Join("testdata", filepath.Base(name))
	if *update {
		if err := os.MkdirAll("testdata", 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(golden, got, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(string(want), string(got)); d != "" {
		t.Errorf("%s (-want +got):\n%s", name, d)
	}
}
