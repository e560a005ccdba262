package chart_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/channels/chart"
)

func mirrored(t testing.TB, take *channels.Take) *channels.Take {
	t.Helper()
	out, err := chart.Mirror(take)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// The mirrored left wristband is the right one's image: its gyroscope fits its
// accelerometer as the right one's does, which a wrong sign would spoil.
func TestMirrorWristbands(t *testing.T) {
	const tolerance = 1e-6 // rad
	for _, take := range puppetTakes(t, 20) {
		m := mirrored(t, take)
		for _, wrists := range [][2]string{{"left_wrist", "right_wrist"}, {"right_wrist", "left_wrist"}} {
			if a, b := mismatch(m, wrists[0]), mismatch(take, wrists[1]); !(math.Abs(a-b) <= tolerance) {
				t.Errorf("%s: the gyroscope leaves gravity by %g rad, mirrored by %g rad", take.ID, b, a)
			}
		}
		if again := mirrored(t, m); !slices.Equal(again.Data, take.Data) {
			t.Errorf("%s: mirrored twice it is another", take.ID)
		}
	}
}

func TestMirrorSigns(t *testing.T) {
	cases := []struct {
		name, headers string
		data, want    []float64
	}{
		{"accelerations along y", "left.accel.x left.accel.y left.accel.z right.accel.x right.accel.y right.accel.z",
			[]float64{1, 2, 3, 4, 5, 6}, []float64{4, -5, 6, 1, -2, 3}},
		{"rates across y", "left.gyro.x left.gyro.y left.gyro.z right.gyro.x right.gyro.y right.gyro.z",
			[]float64{1, 2, 3, 4, 5, 6}, []float64{-4, 5, -6, -1, 2, -3}},
		{"places along the way from side to side", "l_hand.pos.x l_hand.pos.y r_hand.pos.x r_hand.pos.y",
			[]float64{4, 1, 1, 2}, []float64{4, 2, 1, 1}},
		{"quaternions across y", strings.ReplaceAll(quaternion, "a.", "left.") + " " + strings.ReplaceAll(quaternion, "a.", "right."),
			[]float64{1, 2, 3, 4, 5, 6, 7, 8}, []float64{-5, 6, -7, 8, -1, 2, -3, 4}},
		{"scalars change places", "left_grip right_grip mood", []float64{1, 2, 3}, []float64{2, 1, 3}},
		{"joint angles change places", "LKnee.jntang.x RKnee.jntang.x", []float64{1, 2}, []float64{2, 1}},
		{"initials", "lfemur.jntang rfemur.jntang lowerback.jntang", []float64{1, 2, 3}, []float64{2, 1, 3}},
		{"the middle", "LEFT.accel.y RIGHT.accel.y back.accel.y L5.accel.y", []float64{1, 2, 3, 4}, []float64{-2, -1, -3, -4}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := mirrored(t, named(t, c.headers, c.data))
			if d := farthest(t, c.want, m.Data); !(d <= 1e-12) {
				t.Errorf("mirrored %v, want %v", m.Data, c.want)
			}
		})
	}
}

func TestMirrorFaults(t *testing.T) {
	cases := []struct{ headers, want string }{
		{"a.accel.x b.accel.x", "mirror take t: no channel has a counterpart on the other side"},
		{"left_wrist.accel.x", "mirror take t: channel left_wrist.accel.x has no counterpart right_wrist.accel.x"},
		{"left.x right.x", "mirror take t: channel left.x has no known quantity"},
	}
	for _, c := range cases {
		_, err := chart.Mirror(named(t, c.headers, nil))
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("error %v, want %s", err, c.want)
		}
	}
}

// A mirrored body has its bones, and each joint is where the mirror image of
// the other side's is, as far as the sides are of one size.
func TestMirrorFigure(t *testing.T) {
	take := standingFigure(t, 0.5)
	m := mirrored(t, take)
	if d := worstBone(m); !(d <= 1e-9) {
		t.Errorf("a bone is off its length by %g of it", d)
	}
	other := func(name string) int {
		swap := strings.NewReplacer("Left", "Right", "Right", "Left")
		return take.Skeleton.Index(swap.Replace(name))
	}
	// The image of the hips tells where the mirror is.
	plane := (place(take, 0)[0] + place(m, 0)[0]) / 2
	for i, j := range take.Skeleton.Joints {
		is, was := place(m, i), place(take, other(j.Name))
		for k := 0; k < len(is); k += 3 {
			want := body.MirrorPolar(vec(was[k:]), body.X)
			want.X += 2 * plane
			if d := r3.Norm(r3.Sub(vec(is[k:]), want)); !(d <= 1e-9) {
				t.Fatalf("%s is off its image by %g m", j.Name, d)
			}
		}
	}
	if d := farthest(t, take.Data, mirrored(t, m).Data); !(d <= 1e-9) {
		t.Errorf("mirrored twice it is off by %g", d)
	}
}

func TestMirrorOpenSkeletons(t *testing.T) {
	for _, take := range openTakes(t) {
		m, err := chart.Mirror(take)
		if err != nil { // one has a left leg only
			if !strings.Contains(err.Error(), "has no counterpart") {
				t.Error(err)
			}
			continue
		}
		if d := worstBone(m); !(d <= 1e-9) {
			t.Errorf("%s: a bone is off its length by %g of it", take.ID, d)
		}
		if d := farthest(t, take.Data, mirrored(t, m).Data); !(d <= 1e-9) {
			t.Errorf("%s: mirrored twice it is off by %g", take.ID, d)
		}
	}
}
