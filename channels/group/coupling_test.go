package group_test

import (
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/mat"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest/puppets"
	"strandwise/testdata/opendata"
)

var study = flag.Int("study", 0, "repeat the tests against made-up truth so many times, and print what they measure")

func measure(takes []*channels.Take) *group.Coupling {
	return group.MeasureCoupling(takes, scalesOf(takes), 1)
}

func TestKnownCouplingIsFound(t *testing.T) {
	const tolerance = 0.15
	bare, trimmed, noisy := wrists(0), wrists(0), wrists(0)
	bare.rests, trimmed.trim, noisy.noise = false, 0.05, 0.15
	for name, w := range map[string]truth{"with rests": wrists(0), "without rests": bare, "ends shifted": trimmed, "noisy": noisy} {
		for _, rho := range []float64{0, 0.3, 0.6, 0.9} {
			w.rho = rho
			l := w.layout(true)
			bias, square, inside, beyond := 0.0, 0.0, 0, 0
			repeats := max(*study, 1)
			for seed := range repeats {
				p := measure(w.record(l, uint64(seed))).Pooled.Pairs[0]
				bias += (p.Rho - rho) / float64(repeats)
				square += (p.Rho - rho) * (p.Rho - rho) / float64(repeats)
				if p.Low <= rho && rho <= p.High {
					inside++
				}
				if math.Abs(p.Rho-rho) > tolerance {
					beyond++
				}
				if *study == 0 && (math.Abs(p.Rho-rho) > tolerance || !p.OK || rho >= 0.3 && p.P > 0.05) {
					t.Errorf("%s: ρ = %.3f, p %.3f, ok %t, want %g", name, p.Rho, p.P, p.OK, rho)
				}
			}
			if *study > 0 {
				fmt.Printf("%-13s ρ %.1f: bias %+.3f, rmse %.3f, beyond 0.15: %d, in its interval: %d of %d\n",
					name, rho, bias, math.Sqrt(square), beyond, inside, repeats)
			}
		}
	}
}

// Independent units come out as coupled in one of twenty cases, whichever
// evidence is looked at, and however few the takes are.
func TestIndependentUnitsAreRarelyFoundCoupled(t *testing.T) {
	// The study uses the size of the test above.
	sizes := []struct{ takes, labels, frames int }{{8, 2, 30}}
	repeats := 200
	if *study > 0 {
		repeats = *study
		sizes = append(sizes, struct{ takes, labels, frames int }{30, 4, 60}, struct{ takes, labels, frames int }{3, 6, 60})
	}
	for _, size := range sizes {
		w := wrists(0)
		w.takes, w.labels, w.frames = size.takes, size.labels, size.frames
		l := w.layout(true)
		var joint, timing, shape float64
		for seed := range repeats {
			p := measure(w.record(l, uint64(seed))).Pooled.Pairs[0]
			count := func(n *float64, p float64) {
				if p <= 0.05 {
					*n += 1 / float64(repeats)
				}
			}
			count(&joint, p.P)
			count(&timing, p.PTiming)
			count(&shape, p.PShape)
		}
		if *study > 0 {
			fmt.Printf("%d takes × %d labels: p ≤ 0.05 in %.3f (timing %.3f, shape %.3f) of %d\n", size.takes, size.labels, joint, timing, shape, repeats)
		} else if joint < 0.03 || joint > 0.07 {
			t.Errorf("p ≤ 0.05 in %.3f of the cases, want 0.03 to 0.07", joint)
		}
	}
}

func theatre(t testing.TB, seed uint64) []*channels.Take {
	t.Helper()
	var out []*channels.Take
	for take, err := range puppets.Takes(seed) {
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, take)
	}
	return out
}

// The theatre's recordings are made with one timing for both hands in three
// cues and two in the other three. The report tells them apart, one by one.
func TestTheatreHandsAreToldApart(t *testing.T) {
	together := map[string]bool{"raise-curtain": true, "drop-curtain": true, "thunder-roll": true}
	for seed := range uint64(max(*study, 2)) {
		c := measure(theatre(t, seed+1))
		if len(c.Labels) != 6 {
			t.Fatalf("%d labels", len(c.Labels))
		}
		for _, e := range c.Labels {
			p := e.Pairs[0]
			if !e.People {
				t.Errorf("%s: takes of different people were compared", e.Label)
			}
			good := p.Low < 0.5 && p.Rho < 0.5
			if together[e.Label] {
				good = p.P <= 0.01 && p.Rho > 0.8
			}
			if !good {
				t.Errorf("seed %d, %s: ρ = %.2f (%.2f to %.2f), p %.3f", seed+1, e.Label, p.Rho, p.Low, p.High, p.P)
			}
			if *study > 0 {
				fmt.Printf("seed %d %-14s ρ %.2f (%.2f to %.2f) p %.3f\n", seed+1, e.Label, p.Rho, p.Low, p.High, p.P)
			}
		}
		if p := c.Pooled.Pairs[0]; p.P > 0.01 || !p.OK {
			t.Errorf("seed %d: over all cues p %.3f, ok %t", seed+1, p.P, p.OK)
		}
	}
}

// NATOPS: signals of two arms, both moving in gestures 4 to 6, and mostly the
// right one in 1 to 3.
func TestNATOPSHandsAreCoupled(t *testing.T) {
	takes := opendata.Set(t, "NATOPS")[:180]
	l, err := takes[0].Layout.WithGroups([]channels.Group{
		{Name: "left", Channels: []int{0, 1, 2, 6, 7, 8, 12, 13, 14, 18, 19, 20}},
		{Name: "right", Channels: []int{3, 4, 5, 9, 10, 11, 15, 16, 17, 21, 22, 23}},
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, take := range takes {
		take.Layout = l
	}
	c := measure(takes)
	if p := c.Pooled.Pairs[0]; p.P > 0.001 || p.Rho < 0.3 || p.High > 0.8 || !p.OK {
		t.Errorf("ρ = %.2f (%.2f to %.2f), p %.3f, ok %t", p.Rho, p.Low, p.High, p.P, p.OK)
	}
	for _, e := range c.Labels[3:] {
		if p := e.Pairs[0]; p.P > 0.01 || p.Rho < 0.5 {
			t.Errorf("gesture %s of both hands: ρ = %.2f, p %.3f", e.Label, p.Rho, p.P)
		}
	}
}

func TestFewTakesDoNotTell(t *testing.T) {
	w := wrists(0.9)
	for _, c := range []struct{ takes, labels int }{{0, 1}, {1, 1}, {1, 6}, {2, 1}, {2, 4}, {3, 1}, {4, 2}} {
		w.takes, w.labels = c.takes, c.labels
		got := measure(w.record(w.layout(true), 1))
		if got.Pooled.OK || got.Matrix("label 0") != nil {
			t.Errorf("%d takes of %d labels are said to tell", c.takes, c.labels)
		}
		if got.Pooled.Need.Takes <= got.Pooled.Takes && c.takes > 0 {
			t.Errorf("%d takes of %d labels: %d would do", c.takes, c.labels, got.Pooled.Need.Takes)
		}
		if _, err := json.Marshal(got); err != nil {
			t.Errorf("%d takes of %d labels: %v", c.takes, c.labels, err)
		}
	}
}

// What Need asks for is enough when it is there.
func TestNeedIsHonest(t *testing.T) {
	w := wrists(0.5)
	w.labels, w.takes = 1, 3
	need := measure(w.record(w.layout(true), 2)).Pooled.Need
	w.takes = 2 * need.Takes // the need is an estimate; its double must do
	if got := measure(w.record(w.layout(true), 2)); !got.Pooled.OK {
		t.Errorf("%d takes were said to do; twice as many do not: %+v", need.Takes, got.Pooled.Need)
	}
}

func TestStandingLimbsAreNoFault(t *testing.T) {
	w := wrists(0)
	w.takes, w.frames = 12, 30
	takes := w.record(w.layout(true), 1)
	for _, take := range takes {
		for i := range take.Data {
			if i%6 > 2 {
				take.Data[i] = 3
			}
		}
	}
	got := measure(takes)
	if p := got.Pooled.Pairs[0]; got.Pooled.OK || p.Rho != 0 || p.P != 1 {
		t.Errorf("a limb that never moves is coupled: %+v", p)
	}
	if _, err := json.Marshal(got); err != nil {
		t.Error(err)
	}
}

func TestTakesOfManyLengthsAndClocks(t *testing.T) {
	w := wrists(0.9)
	w.takes = 12
	takes := w.record(w.layout(true), 3)
	for i, take := range takes {
		for f := range take.Time {
			take.Time[f] = float64(f)/50 + 0.004*float64(f%3) + float64(i)
		}
		if i%5 == 0 { // one frame in two
			var time, data []float64
			for f := 0; f < take.Frames(); f += 2 {
				time, data = append(time, take.Time[f]), append(data, take.Frame(f)...)
			}
			take.Time, take.Data = time, data
		}
	}
	if p := measure(takes).Pooled.Pairs[0]; p.Rho < 0.75 || !p.OK {
		t.Errorf("ρ = %.2f, ok %t, want 0.9", p.Rho, p.OK)
	}
}

func TestSameSeedSameNumbers(t *testing.T) {
	w := wrists(0.5)
	w.takes, w.frames = 45, 30 // more than are read
	takes := w.record(w.layout(true), 4)
	a, b := measure(takes), measure(takes)
	if d := cmp.Diff(a, b); d != "" {
		t.Error(d)
	}
	if other := group.MeasureCoupling(takes, scalesOf(takes), 2); cmp.Equal(a, other) {
		t.Error("the seed changes nothing")
	}
}

// A person's tempo makes both hands late together. It is no coupling once the
// recordings say who performed; where they do not, it cannot be told from one.
func TestHabitsOfPeopleAreNoCoupling(t *testing.T) {
	w := wrists(0)
	w.takes, w.labels = 24, 4
	takes := w.record(w.layout(true), 5)
	for i, take := range takes {
		person := i % 4
		for f := range take.Time {
			take.Time[f] *= 0.7 + 0.2*float64(person)
		}
	}
	if p := measure(takes).Pooled.Pairs[0]; p.P > 0.001 {
		t.Errorf("unknown people: p = %.3f, want the tempo to show", p.P)
	}
	for i, take := range takes {
		take.Subject = fmt.Sprint("person ", i%4)
	}
	if p := measure(takes).Pooled.Pairs[0]; p.P < 0.05 || math.Abs(p.Rho) > 0.25 {
		t.Errorf("known people: ρ = %.2f, p = %.3f", p.Rho, p.P)
	}
}

func TestMatrixIsACorrelationMatrix(t *testing.T) {
	w := wrists(0.6)
	w.groups, w.takes = []int{0, 1, 2}, 12
	c := measure(w.record(w.layout(true), 6))
	for _, label := range []string{"label 0", "no such label"} {
		m := c.Matrix(label)
		if m == nil || m.SymmetricDim() != 3 {
			t.Fatalf("%q: %v", label, m)
		}
		root, err := group.SquareRoot(m)
		if err != nil {
			t.Fatal(err)
		}
		var back mat.Dense
		back.Mul(root, root)
		if !mat.EqualApprox(&back, m, 1e-9) {
			t.Errorf("%q: the square of the root is\n%v", label, mat.Formatted(&back))
		}
	}
	one := &group.Coupling{Limbs: []string{"a", "b"}, Pooled: group.Estimate{OK: true, Pairs: []group.Pair{{A: "a", B: "b", Rho: -0.4}}}}
	if got := one.Matrix("").At(0, 1); got != 0 {
		t.Errorf("limbs that run against each other have %g, want 0", got)
	}
}

func ExampleMeasureCoupling() {
	var takes []*channels.Take
	var scales channels.Scales
	for take := range puppets.Takes(1) {
		takes = append(takes, take)
		scales.Add(take)
	}
	c := group.MeasureCoupling(takes, &scales, 1)
	for i := range c.Labels {
		e := &c.Labels[i]
		fmt.Printf("%-14s %s\n", e.Label, e.Pairs[0].Verdict(e))
	}
	// Output:
	// drop-curtain   yes
	// light-lantern  no
	// rain-patter    no
	// raise-curtain  yes
	// snuff-lantern  no
	// thunder-roll   yes
}

// go test -bench MeasureCoupling ./channels/group
func BenchmarkMeasureCoupling(b *testing.B) {
	for _, limbs := range []int{2, 4} {
		for _, frames := range []int{60, 300} {
			w := wrists(0.5)
			w.groups, w.axes, w.labels, w.frames = []int{0, 1, 2, 3}[:limbs], 6, 6, frames
			takes := w.record(w.layout(true), 1)
			s := scalesOf(takes)
			b.Run(fmt.Sprintf("limbs=%d/frames=%d", limbs, frames), func(b *testing.B) {
				for b.Loop() {
					group.MeasureCoupling(takes, s, 1)
				}
				b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N*len(takes)), "µs/take")
			})
		}
	}
}
