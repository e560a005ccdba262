package group_test

import (
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/group"
	"strandwise/testdata/opendata"
)

var update = flag.Bool("update", false, "rewrite the golden files under testdata")

func propose(t *testing.T, takes []*channels.Take) *group.Proposal {
	t.Helper()
	p, err := group.Propose(takes, group.Options{})
	if err != nil {
		t.Fatal(err)
	}
	// Whatever is proposed can be written into a plan, and be used.
	got, err := group.FromRules(takes[0].Layout.Channels, p.Rules)
	if err == nil {
		_, err = takes[0].Layout.WithGroups(got)
	}
	if err != nil {
		t.Fatalf("%v: %v", p.Rules, err)
	}
	if _, err := json.Marshal(p); err != nil {
		t.Fatal(err)
	}
	return p
}

// rules writes a proposal's rules as one line.
func rules(p *group.Proposal) string {
	var out []string
	for _, r := range p.Rules {
		out = append(out, r.String())
	}
	return strings.Join(out, "; ")
}

// Four nameless units of three axes, of which two and two share their timing.
func TestPlantedGroupsAreFound(t *testing.T) {
	const want = "c0-c2@limb_1=c0-c2; c3-c5@limb_2=c3-c5; c6-c8@limb_1=c6-c8; c9-c11@limb_2=c9-c11"
	for _, rho := range []float64{0, 0.3, 0.6, 0.9} {
		w := wrists(rho)
		w.groups, w.takes = []int{0, 1, 0, 1}, 15
		if *study > 0 {
			w.takes = 30
		}
		l := w.layout(false)
		found := 0
		for seed := range max(*study, 1) {
			if got := rules(propose(t, w.record(l, uint64(seed)))); got == want {
				found++
			} else if *study == 0 {
				t.Errorf("ρ = %g between the groups: %s", rho, got)
			}
		}
		if *study > 0 {
			fmt.Printf("ρ %.1f between planted groups: found in %d of %d\n", rho, found, *study)
		}
	}
}

func TestProposeNATOPS(t *testing.T) {
	p := propose(t, opendata.Set(t, "NATOPS")[:180])
	const want = "c0-c2@limb_1=c0-c2; c3-c5@limb_2=c3-c5; c6-c8@limb_1=c6-c8; c9-c11@limb_2=c9-c11; " +
		"c12-c14@limb_1=c12-c14; c15-c17@limb_2=c15-c17; c18-c20@limb_1=c18-c20; c21-c23@limb_2=c21-c23"
	if got := rules(p); got != want {
		t.Errorf("got %s", got)
	}
	if n := len(p.Bones); n < 4 || n > 6 {
		t.Errorf("%d bones, there are 3 in each arm: %v", n, p.Bones)
	}
	if q := p.Coupling.Pooled.Pairs; len(q) != 1 || q[0].P > 0.001 || !q[0].OK {
		t.Errorf("%+v", q)
	}
}

func TestProposeTheTheatre(t *testing.T) {
	p := propose(t, theatre(t, 1))
	if got := len(p.Limbs); got != 2 {
		t.Errorf("%d limbs", got)
	}
	if len(p.Triads) != 4 || len(p.Notes) != 0 {
		t.Errorf("triads %v, notes %v", p.Triads, p.Notes)
	}
	for _, triad := range p.Triads {
		if same := triad.Accel[:4] == triad.Gyro[:4]; same != triad.Together() {
			t.Errorf("%+v", triad)
		}
	}
}

// Gyroscopes that were plugged in the wrong way round are noticed.
func TestSwappedGyroscopesAreNoted(t *testing.T) {
	takes := theatre(t, 1)[:24]
	for _, take := range takes {
		for f := range take.Frames() {
			v := take.Frame(f)
			for c := range 3 {
				v[3+c], v[9+c] = v[9+c], v[3+c]
			}
		}
	}
	p := propose(t, takes)
	if len(p.Notes) != 2 || !strings.Contains(p.Notes[0], "left_wrist.accel turns with right_wrist.gyro") {
		t.Errorf("notes %q", p.Notes)
	}
}

func TestProposeFallsBack(t *testing.T) {
	p := propose(t, theatre(t, 1)[:3])
	if got := strings.Join(p.Notes, "\n"); !strings.Contains(got, "3 takes are too few") || !strings.Contains(got, "about 11 would do") || !strings.Contains(got, "names say") {
		t.Errorf("notes %q", got)
	}
	if len(p.Limbs) != 2 {
		t.Errorf("limbs %v", p.Limbs)
	}
	w := wrists(0)
	w.takes, w.labels = 2, 1
	p = propose(t, w.record(w.layout(false), 1))
	if got := rules(p); got != "c0-c2@all=c0-c2; c3-c5@all=c3-c5" {
		t.Errorf("got %s", got)
	}
	if got := strings.Join(p.Notes, "\n"); !strings.Contains(got, "all share one timing") {
		t.Errorf("notes %q", got)
	}
}

func TestProposeKeepsStatedGroups(t *testing.T) {
	w := wrists(0)
	w.takes = 10
	p := propose(t, w.record(w.layout(true), 1))
	if got := rules(p); got != "u0@u0=c0-c2; u1@u1=c3-c5" {
		t.Errorf("got %s", got)
	}
	if got := p.Groups[0].From; !slices.Equal(got, []group.Source{group.Stated}) {
		t.Errorf("from %v", got)
	}
}

// Limbs that are one body are joined, even against their names.
func TestProposeJoinsWhatIsOneBody(t *testing.T) {
	w := wrists(1)
	w.takes = 15
	takes := w.record(w.layout(true), 2)
	l := &channels.Layout{Channels: named("left_hand.pos.x", "left_hand.pos.y", "left_hand.pos.z", "right_hand.pos.x", "right_hand.pos.y", "right_hand.pos.z")}
	l.Groups = group.FromNames(l.Channels)
	for _, take := range takes {
		take.Layout = l
	}
	p := propose(t, takes)
	if len(p.Limbs) != 1 || p.Limbs[0].Name != "left_arm+right_arm" || !slices.Contains(p.Limbs[0].From, group.Data) {
		t.Errorf("%+v", p.Limbs)
	}
	if len(p.Coupling.Limbs) != 1 || len(p.Candidate.Limbs) != 2 {
		t.Errorf("coupling of %v, candidates %v", p.Coupling.Limbs, p.Candidate.Limbs)
	}
}

func TestCandidatesByName(t *testing.T) {
	for _, c := range []struct{ name, headers, want string }{
		{"one channel", "c0", "c0@all=c0"},
		{"two axes", "c0 c1", "c0-c1@all=c0-c1"},
		{"three runs", "c0 c1 c2 a1 a2 d7", "c0-c2@all=c0-c2; a1-a2@all=a1-a2; d7@all=d7"},
		{"a run with a gap", "c0 c1 c2 c4 c5 c6", "c0-c2@all=c0-c2; c4-c6@all=c4-c6"},
		{"no numbers", "x y", "all@all=x,y"},
		{"some numbers", "c0 c1 c2 battery", "c0-c2@all=c0-c2; other@all=battery"},
		{"names", "left.pos.x left.pos.y right.pos.x", "left.pos@left=left.pos.x,left.pos.y; right.pos@right=right.pos.x"},
	} {
		l := &channels.Layout{Channels: named(strings.Fields(c.headers)...)}
		take := &channels.Take{Label: "a", Layout: l, Time: []float64{0, 1, 2}}
		for i := range 3 * len(l.Channels) {
			take.Data = append(take.Data, float64(i*i%7))
		}
		if got := rules(propose(t, []*channels.Take{take})); got != c.want {
			t.Errorf("%s: %s, want %s", c.name, got, c.want)
		}
	}
	units := &channels.Layout{}
	for i := range 6 {
		q := channels.Acceleration
		if i > 2 {
			q = channels.AngularRate
		}
		name := fmt.Sprint("c", i)
		units.Channels = append(units.Channels, channels.Channel{Name: name, TrackedPoint: name, Quantity: q})
	}
	units.Groups = group.FromNames(units.Channels)
	take := &channels.Take{Label: "a", Layout: units, Time: []float64{0, 1}, Data: make([]float64, 12)}
	if got := rules(propose(t, []*channels.Take{take})); got != "c0-c2@all=c0-c2; c3-c5@all=c3-c5" {
		t.Errorf("numbered channels with units: %s", got)
	}
}

func TestProposeNeedsATake(t *testing.T) {
	if _, err := group.Propose(nil, group.Options{}); err == nil {
		t.Error("groups of nothing")
	}
}

// arms swings two stiff arms of three points each about shoulders that stand
// apart: nameless places with bones.
func arms(rng *rand.Rand, frames int) *channels.Take {
	take := &channels.Take{Label: "swing", Layout: &channels.Layout{}}
	for c := range 18 {
		take.Layout.Channels = append(take.Layout.Channels, channels.Channel{Name: fmt.Sprint("m", c), Quantity: channels.Misc})
	}
	speed := [2]float64{3 + rng.Float64(), 5 + rng.Float64()}
	for f := range frames {
		s := float64(f) / 50
		take.Time = append(take.Time, s)
		for arm, v := range speed {
			at := r3.Vec{X: 0.4 * float64(arm)}
			for bone := range 3 {
				a, b := math.Sin(v*s+float64(bone)), math.Cos(v*s*1.3)
				at = r3.Add(at, r3.Scale(0.3, r3.Vec{X: math.Cos(a) * math.Cos(b), Y: math.Sin(a) * math.Cos(b), Z: math.Sin(b)}))
				take.Data = append(take.Data, at.X, at.Y, at.Z)
			}
		}
	}
	return take
}

func TestBonesMakeLimbsOfNamelessPlaces(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	p := propose(t, []*channels.Take{arms(rng, 80), arms(rng, 90)})
	const want = "m0-m2@limb_1=m0-m2; m3-m5@limb_1=m3-m5; m6-m8@limb_1=m6-m8; m9-m11@limb_2=m9-m11; m12-m14@limb_2=m12-m14; m15-m17@limb_2=m15-m17"
	if got := rules(p); got != want {
		t.Errorf("got %s", got)
	}
	for _, b := range p.Bones {
		if math.Abs(b.Length-0.3) > 1e-9 || b.Spread > 1e-9 {
			t.Errorf("%+v, want 0.3 m", b)
		}
	}
	if !slices.Contains(p.Limbs[0].From, group.Bones) {
		t.Errorf("%+v", p.Limbs[0])
	}
}

func TestSkeletonMakesATrunk(t *testing.T) {
	s := &body.Skeleton{}
	take := &channels.Take{Label: "a", Layout: &channels.Layout{}, Skeleton: s, Time: []float64{0, 1}}
	for _, j := range []struct {
		name   string
		parent int
	}{
		{"Hips", -1}, {"LeftUpLeg", 0}, {"LeftLeg", 1}, {"RightUpLeg", 0}, {"RightLeg", 3}, {"Spine", 0},
		{"LeftArm", 5}, {"LeftHand", 6}, {"RightArm", 5}, {"RightHand", 8}, {"Neck", 5}, {"Head", 10},
	} {
		s.Joints = append(s.Joints, body.Joint{Name: j.name, Parent: j.parent})
		c, _ := channels.ParseHeader(j.name + ".ornt.x")
		take.Layout.Channels = append(take.Layout.Channels, c)
		take.Data = append(take.Data, 0, 1)
	}
	p := propose(t, []*channels.Take{take})
	var limbs []string
	for _, l := range p.Limbs {
		limbs = append(limbs, l.Name)
	}
	if d := cmp.Diff([]string{"trunk", "left_leg", "right_leg", "left_arm", "right_arm", "Neck"}, limbs); d != "" {
		t.Error(d)
	}
}

// The report, of figures that are given, so that it does not hang on the last
// digit of a computation.
func TestReport(t *testing.T) {
	pair := func(rho, p float64, ok bool) []group.Pair {
		return []group.Pair{{A: "left", B: "right", Rho: rho, Low: rho - 0.1, High: rho + 0.1, Shape: 0.2, P: p, OK: ok}}
	}
	p := &group.Proposal{
		Groups: []group.Proposed{
			{Name: "left.pos", Limb: "left", Channels: []string{"left.pos.x", "left.pos.y"}, From: []group.Source{group.Names}},
			{Name: "right.pos", Limb: "right", Channels: strings.Fields("r.x r.y r.z r.u r.v"), From: []group.Source{group.Names}},
		},
		Limbs: []group.Proposed{
			{Name: "left", From: []group.Source{group.Names, group.Bones}, Evidence: []string{"side, limb or tracked point in the names", "2 bones: distances that vary by 1 to 2 %"}},
			{Name: "right", From: []group.Source{}},
		},
		Merges:    []group.Merge{{Members: []string{"left", "right"}, Similarity: 0.42}},
		Threshold: group.OneBody,
		Coupling: &group.Coupling{
			Limbs:  []string{"left", "right"},
			Pooled: group.Estimate{Takes: 50, Pairs: pair(0.42, 0.001, true), OK: true, Need: group.Need{Takes: 50}},
			Labels: []group.Estimate{
				{Label: "hail", Takes: 20, Pairs: pair(0.81, 0.001, true), OK: true, Need: group.Need{Takes: 20}},
				{Label: "wave", Takes: 25, Pairs: pair(0.03, 0.41, true), OK: true, Need: group.Need{Takes: 25}},
				{Label: "bow", Takes: 5, Pairs: pair(-0.2, 0.7, false), Need: group.Need{Takes: 14}},
			},
		},
		Notes: []string{"mind the step"},
	}
	var got strings.Builder
	if err := p.Write(&got); err != nil {
		t.Fatal(err)
	}
	got.WriteString("\n" + strings.Join(p.Coupling.Comments(), "\n") + "\n")
	golden := filepath.Join("testdata", "proposal.golden")
	if *update {
		if err := os.MkdirAll("testdata", 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(golden, []byte(got.String()), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(string(want), got.String()); d != "" {
		t.Error(d)
	}
}

func ExamplePropose() {
	// Three takes of six columns that say nothing but their numbers.
	l := &channels.Layout{}
	for _, header := range []string{"c0", "c1", "c2", "c3", "c4", "c5"} {
		c, _ := channels.ParseHeader(header)
		l.Channels = append(l.Channels, c)
	}
	var takes []*channels.Take
	for n := range 3 {
		t := &channels.Take{Label: "wave", Layout: l}
		for f := range 50 {
			t.Time = append(t.Time, float64(f)/50)
			for c := range 6 {
				t.Data = append(t.Data, math.Sin(float64(f*(c+1)+n)/10))
			}
		}
		takes = append(takes, t)
	}
	p, err := group.Propose(takes, group.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(strings.Join(group.PlanLines(p.Rules), "\n"))
	fmt.Println(p.Notes[0])
	// Output:
	// group = [
	//   "c0-c2@all=c0-c2",
	//   "c3-c5@all=c3-c5",
	// ]
	// 3 takes are too few to tell how limbs share their timing: they can be paired in so few ways that p cannot be below 0.5; about 11 would do; nothing else says which channels are apart, so all share one timing: name the columns, or state groups in the plan
}
