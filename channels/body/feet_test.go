package body_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
	"strandwise/ingest/bvh"
)

// TestStill finds the stances of a foot that steps three times, under the noise
// of a camera system.
func TestStill(t *testing.T) {
	const rate = 100.0
	for seed := range uint64(20) {
		rng := rand.New(rand.NewPCG(seed, 7))
		var time, places []float64
		for i := range 400 {
			at := float64(i) / rate
			step, part := math.Modf(at)
			forward := 0.6 * (step + minimumJerk((part-0.5)/0.5)) // half a second of stance, half of swing
			lift := 0.1 * math.Max(0, math.Sin(2*math.Pi*(part-0.5)))
			time = append(time, at)
			places = append(places, noisy(rng, r3.Vec{X: forward, Y: lift}, 0.0005)...)
		}
		got := body.StillnessOf(2.5).Still(time, places)
		if len(got) != 4 {
			t.Fatalf("seed %d: %d stances: %v", seed, len(got), got)
		}
		for k, s := range got {
			if from, to := time[s.From], time[s.To-1]; math.Abs(from-float64(k)) > 0.07 || math.Abs(to-float64(k)-0.5) > 0.07 {
				t.Errorf("seed %d: stance %d from %g s to %g s", seed, k, from, to)
			}
			box := 0.0
			for f := s.From; f < s.To; f++ {
				box = max(box, r3.Norm(r3.Sub(vecAt(places, f), vecAt(places, s.From))))
			}
			if box > 0.02 {
				t.Errorf("seed %d: a foot that stands moves %g m", seed, box)
			}
		}
	}
}

func TestStillEdges(t *testing.T) {
	s := body.Stillness{Radius: 0.01, Speed: 0.1, Least: 0.15}
	if got := s.Still(nil, nil); got != nil {
		t.Error(got)
	}
	time, places := make([]float64, 50), make([]float64, 150)
	for i := range time {
		time[i] = float64(i) / 100
	}
	if got := s.Still(time, places); !slices.Equal(got, []body.Interval{{0, 50}}) {
		t.Errorf("never moves: %v", got)
	}
	places[3*25] = math.NaN()
	if got := s.Still(time, places); len(got) != 2 || got[0].To > 25 || got[1].From <= 25 {
		t.Errorf("lost at frame 25: %v", got)
	}
	for i := range time {
		places[3*i] = float64(i) * 0.005 // half a metre a second
	}
	if got := s.Still(time, places); len(got) != 0 {
		t.Errorf("always moves: %v", got)
	}
	// Frames farther apart than the window of speed.
	if got := s.Still([]float64{0, 1, 2, 3}, []float64{0, 0, 0, 0, 0, 0, 1, 0, 0, 1, 0, 0}); len(got) != 2 {
		t.Errorf("at one frame a second: %v", got)
	}
}

// TestFeetOpenData finds the feet of recorded people by geometry alone, and
// when they stand.
func TestFeetOpenData(t *testing.T) {
	for _, c := range []struct {
		file   string
		up     r3.Vec
		feet   []string // ends of legs, at least these
		stands float64  // share of the take in which one of them stands, at least
	}{
		{"20tab_test_mocapbank.bvh", r3.Vec{Y: 1}, []string{"LeftAnkle_end", "RightAnkle_end"}, 0.9},
		{"pybvh_bvh_example.bvh", r3.Vec{Z: 1}, []string{"RightToeBase_end", "LeftToeBase_end"}, 0.8},
		{"pybvh_cmu_12_01_walk.bvh", r3.Vec{Y: 1}, []string{"LeftToeBase_end", "RightToeBase_end"}, 0.4},
	} {
		take := openTake(t, bvh.Format{LengthUnit: "cm"}, "bvh", c.file)
		names, places := placesOf(take)
		up := body.Up(places, len(names))
		if up != c.up {
			t.Errorf("%s: up is %v", c.file, up)
		}
		var parents []int
		for _, j := range take.Skeleton.Joints {
			parents = append(parents, j.Parent)
		}
		var ends []string
		stands := make([]bool, len(take.Time))
		for _, leg := range body.Legs(parents, places, up) {
			end := leg[len(leg)-1]
			ends = append(ends, names[end])
			if !slices.Contains(c.feet, names[end]) {
				continue
			}
			var foot []float64
			for f := range take.Time {
				foot = append(foot, places[3*(f*len(names)+end):][:3]...)
			}
			for _, s := range body.StillnessOf(take.Skeleton.Span()).Still(take.Time, foot) {
				for f := s.From; f < s.To; f++ {
					stands[f] = true
				}
			}
		}
		for _, foot := range c.feet {
			if !slices.Contains(ends, foot) {
				t.Errorf("%s: feet are %v", c.file, ends)
			}
		}
		count := 0
		for _, s := range stands {
			if s {
				count++
			}
		}
		share := float64(count) / float64(len(stands))
		t.Logf("%s: up %v, legs end at %v, a foot stands in %.0f %% of the frames", c.file, up, ends, 100*share)
		if share < c.stands {
			t.Errorf("%s: a foot stands in %.0f %% of the frames", c.file, 100*share)
		}
	}
}

// TestLegs follows legs up to where the body branches. Toes that branch near
// the floor are one foot.
func TestLegs(t *testing.T) {
	parent := []int{-1, 0, 1, 0, 3, 4, 5, 5, 0, 8}
	//               hips spine head hip knee ankle toe toe' hip' foot'
	frame := []float64{
		0, 1, 0, 0, 1.5, 0, 0, 1.8, 0,
		0.1, 0.9, 0, 0.1, 0.5, 0, 0.1, 0.08, 0, 0.1, 0, 0.1, 0.15, 0, 0.1,
		-0.1, 0.9, 0, -0.1, 0, 0,
	}
	if up := body.Up(slices.Concat(frame, frame), 10); up != (r3.Vec{Y: 1}) {
		t.Errorf("up is %v", up)
	}
	got := body.Legs(parent, frame, r3.Vec{Y: 1})
	if len(got) != 2 || !slices.Equal(got[0], []int{3, 4, 5, 6}) || !slices.Equal(got[1], []int{8, 9}) {
		t.Errorf("legs %v", got)
	}
	if got := body.Legs(nil, nil, r3.Vec{Y: 1}); got != nil {
		t.Errorf("legs of nobody: %v", got)
	}
}
