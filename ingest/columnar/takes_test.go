package columnar_test

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"github.com/apache/arrow/go/v15/arrow"
	"github.com/google/go-cmp/cmp"

	"strandwise/ingest/raw"
)

// TestTakeForm reads a table of one row per take, with every kind of list.
func TestTakeForm(t *testing.T) {
	lists := map[string]func(arrow.DataType) arrow.DataType{
		"list":       func(e arrow.DataType) arrow.DataType { return arrow.ListOf(e) },
		"large list": func(e arrow.DataType) arrow.DataType { return arrow.LargeListOf(e) },
		"required":   func(e arrow.DataType) arrow.DataType { return arrow.ListOfNonNullable(e) },
		"fixed":      func(e arrow.DataType) arrow.DataType { return arrow.FixedSizeListOf(3, e) },
	}
	for name, list := range lists {
		second, third := `[0.5]`, `[]` // lists that differ in length
		x2, n2 := `[4]`, `[7]`
		null := `[1,null,3]`
		if name == "fixed" {
			second, third, x2, n2 = `[0.5,0.6,0.7]`, `[0,1,2]`, `[4,5,6]`, `[7,8,9]`
		}
		if name == "required" {
			null = `[1,2,3]`
		}
		rec := record(t, nil,
			col("take", str, `["a","b","c"]`),
			col("label", category, `["wave",null,"nod"]`),
			col("seconds of use", f64, `[1,2,3]`),
			col("time_s", list(f64), `[[0,0.01,0.03],`+second+`,`+third+`]`),
			col("sensor", arrow.StructOf(arrow.Field{Name: "accel.x", Type: list(f32), Nullable: true}, arrow.Field{Name: "note", Type: str, Nullable: true}),
				`[{"accel.x":`+null+`,"note":"x"},{"accel.x":`+x2+`},{"accel.x":`+third+`}]`),
			col("n", list(arrow.PrimitiveTypes.Int8), `[[4,5,6],`+n2+`,null]`).in("deg"),
			col("deep", arrow.ListOf(list(f32)), `[null,null,null]`),
		)
		for _, w := range containers() {
			t.Run(name+"/"+w.name, func(t *testing.T) {
				if name == "large list" && strings.HasPrefix(w.name, "parquet") {
					t.Skip("arrow/go does not write large lists to Parquet")
				}
				got, told, err := readAll(bytes.NewReader(w.write(t, rec)), raw.Input{})
				if err != nil {
					t.Fatal(err)
				}
				want := wantTakes(name)
				if diff := cmp.Diff(want, got, same...); diff != "" {
					t.Error(diff)
				}
				const out = " is no channel and is left out "
				wantTold := []string{
					`column "seconds of use"` + out + `(it holds one value for each take)`,
					`column "sensor.note"` + out + `(it holds text)`,
					`column "deep"` + out + `(it holds lists within lists)`,
				}
				if diff := cmp.Diff(wantTold, told); diff != "" {
					t.Error(diff)
				}
			})
		}
	}
}

func wantTakes(name string) []*raw.Take {
	nan := math.NaN()
	layout := &raw.Layout{Columns: []raw.Column{header("sensor.accel.x"), header("n [deg]")}}
	a := &raw.Take{
		Identity: raw.Identity{Take: "a", Label: "wave"}, Layout: layout,
		Time: []float64{0, 0.01, 0.03}, Data: []float64{1, 4, nan, 5, 3, 6},
	}
	b := &raw.Take{Identity: raw.Identity{Take: "b"}, Layout: layout, Time: []float64{0.5}, Data: []float64{4, 7}}
	c := &raw.Take{Identity: raw.Identity{Take: "c", Label: "nod"}, Layout: layout}
	if name == "required" {
		a.Data[2] = 2
	}
	if name == "fixed" {
		b.Time, b.Data = []float64{0.5, 0.6, 0.7}, []float64{4, 7, 5, 8, 6, 9}
		c.Time, c.Data = []float64{0, 1, 2}, []float64{0, nan, 1, nan, 2, nan}
	}
	return []*raw.Take{a, b, c}
}

// TestTakesWithoutNames reads a table whose takes have no names and no clock.
func TestTakesWithoutNames(t *testing.T) {
	rec := record(t, nil, col("ax", arrow.ListOf(f32), `[[1,2],[3,4]]`), col("started", arrow.FixedWidthTypes.Date32, `["2024-01-02","2024-01-02"]`))
	for _, w := range containers() {
		got, told, err := readAll(bytes.NewReader(w.write(t, rec)), raw.Input{})
		if err != nil {
			t.Fatal(err)
		}
		layout := &raw.Layout{Columns: []raw.Column{header("ax")}}
		want := []*raw.Take{
			{Identity: raw.Identity{Take: "1"}, Layout: layout, Clock: raw.Frames, Time: []float64{0, 1}, Data: []float64{1, 2}},
			{Identity: raw.Identity{Take: "2"}, Layout: layout, Clock: raw.Frames, Time: []float64{0, 1}, Data: []float64{3, 4}},
		}
		if diff := cmp.Diff(want, got, same...); diff != "" {
			t.Errorf("%s: %s", w.name, diff)
		}
		if len(told) != 2 || told[1] != "has no take column, so the takes are named by their rows" {
			t.Errorf("%s: told %q", w.name, told)
		}
	}
}
