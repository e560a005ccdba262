package bvh_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"strandwise/ingest/bvh"
	"strandwise/ingest/raw"
)

// node is a joint of a drawn file, and what its columns hold.
type node struct {
	name     string
	parent   int
	offset   [3]float64
	channels []string
	values   [][]float64 // frames × channels
	end      bool
}

var (
	moveNames = []string{"Xposition", "Yposition", "Zposition"}
	turnNames = []string{"Xrotation", "Yrotation", "Zrotation"}
	number    = rapid.Map(rapid.IntRange(-2000, 2000), func(n int) float64 { return float64(n) / 16 })
)

// drawFile draws the joints of a file, with any channels in any order.
func drawFile(t *rapid.T) []node {
	frames := rapid.IntRange(1, 3).Draw(t, "frames")
	var nodes []node
	for i := range rapid.IntRange(1, 8).Draw(t, "joints") {
		n := node{name: fmt.Sprintf("J%d", i), parent: rapid.IntRange(-1, i-1).Draw(t, "parent")}
		for k := range n.offset {
			n.offset[k] = number.Draw(t, "offset")
		}
		for n.parent >= 0 && nodes[n.parent].end {
			n.parent = nodes[n.parent].parent
		}
		n.end = n.parent >= 0 && rapid.IntRange(0, 3).Draw(t, "end") == 0
		if !n.end {
			moves := rapid.Permutation(moveNames).Draw(t, "moves")[:rapid.IntRange(0, 3).Draw(t, "number of moves")]
			turns := rapid.SliceOfN(rapid.SampledFrom(turnNames), 0, 3).Draw(t, "turns")
			if i == 0 && len(moves)+len(turns) == 0 {
				turns = turnNames[:1]
			}
			// Moves stand between the turns, wherever it may be.
			at := rapid.IntRange(0, len(turns)).Draw(t, "place of the moves")
			n.channels = append(append(append(n.channels, turns[:at]...), moves...), turns[at:]...)
		}
		for range frames {
			n.values = append(n.values, rapid.SliceOfN(number, len(n.channels), len(n.channels)).Draw(t, "values"))
		}
		nodes = append(nodes, n)
	}
	return nodes
}

// text writes the drawn file, limb by limb, and returns the order of its joints.
func text(t *rapid.T, nodes []node) (string, []int) {
	var b strings.Builder
	var order []int
	gap := func() string { return rapid.SampledFrom([]string{" ", "\n", "\r\n\t", "  "}).Draw(t, "gap") }
	cased := func(s string) string {
		return rapid.SampledFrom([]string{s, strings.ToUpper(s), strings.ToLower(s)}).Draw(t, "case")
	}
	var joint func(i int)
	joint = func(i int) {
		n := nodes[i]
		order = append(order, i)
		title := cased("JOINT") + " " + n.name
		switch {
		case n.end:
			title = cased("End Site")
		case n.parent < 0:
			title = cased("ROOT") + " " + n.name
		}
		fmt.Fprintf(&b, "%s%s{%s%s %v %v %v", title, gap(), gap(), cased("OFFSET"), n.offset[0], n.offset[1], n.offset[2])
		if !n.end {
			fmt.Fprintf(&b, "%s%s %d", gap(), cased("CHANNELS"), len(n.channels))
		}
		for _, c := range n.channels {
			b.WriteString(gap() + cased(c))
		}
		b.WriteString(gap())
		for k, c := range nodes {
			if c.parent == i {
				joint(k)
			}
		}
		b.WriteString("}" + gap())
	}
	b.WriteString(cased("HIERARCHY") + "\n")
	for i, n := range nodes {
		if n.parent < 0 {
			joint(i)
		}
	}
	fmt.Fprintf(&b, "\n%s\n%s: %d\n%s: 0.01\n", cased("MOTION"), cased("Frames"), len(nodes[0].values), cased("Frame Time"))
	for f := range nodes[0].values {
		for _, i := range order {
			for _, v := range nodes[i].values[f] {
				fmt.Fprintf(&b, "%v\t", v)
			}
		}
		b.WriteString("\r\n")
	}
	return b.String(), order
}

// worldSlow returns the place of a joint in the world by products of 4 × 4
// matrices, one for each channel, in the order of the file.
func worldSlow(nodes []node, i, frame int) r3.Vec {
	world := mat.NewDiagDense(4, []float64{1, 1, 1, 1})
	var m mat.Matrix = world
	for k := i; k >= 0; k = nodes[k].parent {
		n := nodes[k]
		local := mat.NewDense(4, 4, []float64{1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1})
		for axis, at := range translation(n, frame) {
			local.Set(axis, 3, at)
		}
		for c, name := range n.channels {
			if axis := strings.Index("XYZ", name[:1]); name[1:] == "rotation" {
				var next mat.Dense
				next.Mul(local, turnMatrix(axis, n.values[frame][c]))
				local = &next
			}
		}
		var next mat.Dense
		next.Mul(local, m)
		m = &next
	}
	return r3.Vec{X: m.At(0, 3), Y: m.At(1, 3), Z: m.At(2, 3)}
}

// translation returns where a joint is in the frame of its parent, by the rule
// of the package documentation.
func translation(n node, frame int) [3]float64 {
	at := n.offset
	toOffset, toZero := 0.0, 0.0
	for _, row := range n.values {
		for c, name := range n.channels {
			if axis := strings.Index("XYZ", name[:1]); name[1:] == "position" {
				toOffset += (row[c] - n.offset[axis]) * (row[c] - n.offset[axis])
				toZero += row[c] * row[c]
			}
		}
	}
	for c, name := range n.channels {
		if axis := strings.Index("XYZ", name[:1]); name[1:] == "position" {
			at[axis] = n.values[frame][c]
			if toOffset >= toZero {
				at[axis] += n.offset[axis]
			}
		}
	}
	return at
}

func turnMatrix(axis int, degrees float64) *mat.Dense {
	s, c := math.Sincos(degrees * math.Pi / 180)
	m := mat.NewDense(4, 4, []float64{1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1})
	a, b := (axis+1)%3, (axis+2)%3
	m.Set(a, a, c)
	m.Set(a, b, -s)
	m.Set(b, a, s)
	m.Set(b, b, c)
	return m
}

// TestReference reads drawn files and holds every place against the slow way,
// then writes and reads them again.
func TestReference(t *testing.T) {
	const tolerance = 1e-9 // metres, in skeletons of up to a kilometre
	rapid.Check(t, func(r *rapid.T) {
		nodes := drawFile(r)
		file, order := text(r, nodes)
		m, err := bvh.Format{LengthUnit: "m"}.Decode(strings.NewReader(file), raw.Input{Name: "a.bvh"})
		if err != nil {
			r.Fatalf("%v in\n%s", err, file)
		}
		for f := range m.Frames() {
			at := places(m, f)
			for k, i := range order {
				if want := worldSlow(nodes, i, f); !(r3.Norm(r3.Sub(at[k], want)) <= tolerance) {
					r.Fatalf("frame %d: %s at %v, want %v, in\n%s", f, nodes[i].name, at[k], want, file)
				}
			}
		}
		again, err := bvh.Format{LengthUnit: "m"}.Decode(strings.NewReader(written(t, m)), raw.Input{Name: "a.bvh"})
		if err != nil {
			r.Fatalf("%v in\n%s", err, written(t, m))
		}
		// Angles have nine decimals, over at most eight bones of up to 220 m.
		if d := farthest(m, again); !(d <= 1e-7) {
			r.Fatalf("strays by %g m:\n%s\n%s", d, file, written(t, m))
		}
	})
}
