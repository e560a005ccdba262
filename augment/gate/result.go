package gate

import (
	"fmt"
	"math"
	"strings"
)

// Gate is one thing that is checked.
type Gate int

// The gates, in the order in which they are reported.
const (
	Finite Gate = iota
	Range
	Jerk
	Bandwidth
	Bones
	Stray
	Copy

	number int = iota
)

var names = [number]string{"finite", "range", "jerk", "bandwidth", "bones", "stray", "copy"}

// All lists the gates in order.
func All() []Gate {
	out := make([]Gate, number)
	for i := range out {
		out[i] = Gate(i)
	}
	return out
}

// String returns the gate's name.
func (g Gate) String() string {
	if g < 0 || int(g) >= number {
		return fmt.Sprintf("gate %d", int(g))
	}
	return names[g]
}

// Parse reads the name of a gate. The error lists the legal names.
func Parse(name string) (Gate, error) {
	for i, n := range names {
		if n == name {
			return Gate(i), nil
		}
	}
	return 0, fmt.Errorf("unknown gate %q; legal gates are %s", name, strings.Join(names[:], ", "))
}

// MarshalText writes the gate's name.
func (g Gate) MarshalText() ([]byte, error) {
	if g < 0 || int(g) >= number {
		return nil, fmt.Errorf("gate number %d does not exist", int(g))
	}
	return []byte(names[g]), nil
}

// UnmarshalText reads the gate's name.
func (g *Gate) UnmarshalText(text []byte) error {
	parsed, err := Parse(string(text))
	if err == nil {
		*g = parsed
	}
	return err
}

// Result is what the gates say of one synthetic take.
type Result struct {
	values [number]float64 // NaN where nothing could be measured
	failed [number]bool
}

// OK tells whether the take passed every gate that applies.
func (r Result) OK() bool { return r.failed == [number]bool{} }

// Value returns the figure a gate measured, NaN when there was nothing to
// measure: no bones, say, or one label only.
func (r Result) Value(g Gate) float64 { return r.values[g] }

// Failed tells whether the take failed a gate.
func (r Result) Failed(g Gate) bool { return r.failed[g] }

// Note adds the figures that are finite to a take's parameters, under the name
// of the gate: "gate_jerk".
func (r Result) Note(parameters map[string]float64) {
	for g, v := range r.values {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			parameters["gate_"+names[g]] = v
		}
	}
}

// Counts says how many takes failed which gate. Its zero value is ready for
// use. A take that fails several gates counts at each of them.
type Counts struct {
	Checked int          `json:"checked"`
	Passed  int          `json:"passed"`
	Failed  map[Gate]int `json:"failed"`
}

// Add counts one result.
func (c *Counts) Add(r Result) {
	c.Checked++
	if r.OK() {
		c.Passed++
		return
	}
	for g, failed := range r.failed {
		if failed {
			c.fail(Gate(g), 1)
		}
	}
}

// Merge adds the counts of another run to these.
func (c *Counts) Merge(o Counts) {
	c.Checked += o.Checked
	c.Passed += o.Passed
	for g, n := range o.Failed {
		c.fail(g, n)
	}
}

func (c *Counts) fail(g Gate, n int) {
	if c.Failed == nil {
		c.Failed = make(map[Gate]int)
	}
	c.Failed[g] += n
}
