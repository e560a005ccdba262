package export

import (
	"encoding/json"
	"maps"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func TestParameters(t *testing.T) {
	for _, tc := range []struct {
		parameters map[string]float64
		want       string
	}{
		{nil, `{}`},
		{map[string]float64{"trim_start_s": 0.25}, `{"trim_start_s":0.25}`},
		{map[string]float64{"b": 1, "a": -2, "B": 1e6}, `{"B":1000000,"a":-2,"b":1}`},
		{map[string]float64{"tiny": 1e-7, "huge": 1e21}, `{"huge":1e+21,"tiny":1e-07}`},
		{map[string]float64{"quote\"": 1, "back\\": 2, "line\n": 3, "°": 4}, `{"back\\":2,"line\n":3,"quote\"":1,"°":4}`},
	} {
		if got := new(parameterText).encode(tc.parameters); got != tc.want {
			t.Errorf("%v: %s, want %s", tc.parameters, got, tc.want)
		}
	}
}

// TestParametersReadBack: any finite numbers under any names come back exactly
// and in the order of their names, from memory that is used again.
func TestParametersReadBack(t *testing.T) {
	var p parameterText
	rapid.Check(t, func(t *rapid.T) {
		finite := rapid.Float64().Filter(func(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) })
		want := rapid.MapOfN(rapid.String(), finite, 0, 6).Draw(t, "parameters")
		text := p.encode(want)
		got := map[string]float64{}
		if err := json.Unmarshal([]byte(text), &got); err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		if diff := cmp.Diff(want, got); diff != "" {
			t.Errorf("%s (-want +got):\n%s", text, diff)
		}
		if diff := cmp.Diff(slices.Sorted(maps.Keys(want)), keysOf(t, text)); diff != "" {
			t.Errorf("order of names (-want +got):\n%s", diff)
		}
	})
}

// keysOf returns the keys of a flat JSON object in the order they stand.
func keysOf(t *rapid.T, text string) []string {
	d := json.NewDecoder(strings.NewReader(text))
	var keys []string
	for i := 0; d.More() || i == 0; i++ {
		token, err := d.Token()
		if err != nil {
			t.Fatal(err)
		}
		if key, ok := token.(string); ok {
			keys = append(keys, key)
		}
	}
	return keys
}
