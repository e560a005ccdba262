package channels_test

import (
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strandwise/channels"
)

func TestParseHeader(t *testing.T) {
	const (
		acc, gyro, pos = channels.Acceleration, channels.AngularRate, channels.Position
		ornt, misc     = channels.Orientation, channels.Misc
	)
	for header, want := range map[string]struct {
		name, point string
		quantity    channels.Quantity
		component   string
		held, unit  string // unit the channel is held in; unit the header states
	}{
		// tracked_point.type.component, as Motion-BIDS names channels
		"left_wrist.accel.x [g]":    {"left_wrist.accel.x", "left_wrist", acc, "x", "m/s^2", "g"},
		"left_wrist.gyro.z":         {"left_wrist.gyro.z", "left_wrist", gyro, "z", "rad/s", ""},
		"left_wrist.GYRO.z [deg/s]": {"left_wrist.GYRO.z", "left_wrist", gyro, "z", "rad/s", "deg/s"},
		"tip.pos.y [mm]":            {"tip.pos.y", "tip", pos, "y", "m", "mm"},
		"head.vel.x":                {"head.vel.x", "head", channels.Velocity, "x", "m/s", ""},
		"head.magn.x [uT]":          {"head.magn.x", "head", channels.MagneticField, "x", "T", "uT"},
		"knee.jntang.x":             {"knee.jntang.x", "knee", channels.JointAngle, "x", "rad", ""},
		"trunk.angacc.x":            {"trunk.angacc.x", "trunk", channels.AngularAcceleration, "x", "rad/s^2", ""},
		"left.ornt.quat_w":          {"left.ornt.quat_w", "left", ornt, "quat_w", "1", ""},
		"hip.ornt.x":                {"hip.ornt.x", "hip", ornt, "x", "rad", ""},
		"box.misc.x":                {"box.misc.x", "box", misc, "x", "", ""},

		// other separators, words and cases
		"left-wrist accel x":            {"left-wrist accel x", "left_wrist", acc, "x", "m/s^2", ""},
		"wrist/acc:y":                   {"wrist/acc:y", "wrist", acc, "y", "m/s^2", ""},
		"Accelerometer_X":               {"Accelerometer_X", "", acc, "x", "m/s^2", ""},
		"Gyroscope Y (°/s)":             {"Gyroscope Y", "", gyro, "y", "rad/s", "°/s"},
		"wrist acceleration z (m/s²)":   {"wrist acceleration z", "wrist", acc, "z", "m/s^2", "m/s²"},
		"  left_wrist.acc.x  [ m/s^2 ]": {"left_wrist.acc.x", "left_wrist", acc, "x", "m/s^2", " m/s^2 "},
		"magnetometer.z":                {"magnetometer.z", "", channels.MagneticField, "z", "T", ""},
		"knee angle":                    {"knee angle", "knee", channels.JointAngle, "", "rad", ""},
		"accel":                         {"accel", "", acc, "", "m/s^2", ""},

		// quantity and axis in one word
		"ax":           {"ax", "", acc, "x", "m/s^2", ""},
		"gz [dps]":     {"gz", "", gyro, "z", "rad/s", "dps"},
		"AccX":         {"AccX", "", acc, "x", "m/s^2", ""},
		"gyroz":        {"gyroz", "", gyro, "z", "rad/s", ""},
		"left_gyroz":   {"left_gyroz", "left", gyro, "z", "rad/s", ""},
		"py":           {"py", "", pos, "y", "m", ""},
		"vx":           {"vx", "", channels.Velocity, "x", "m/s", ""},
		"mz":           {"mz", "", channels.MagneticField, "z", "T", ""},
		"qw":           {"qw", "", ornt, "quat_w", "1", ""},
		"left.quat_x":  {"left.quat_x", "left", ornt, "quat_x", "1", ""},
		"left hand qz": {"left hand qz", "left_hand", ornt, "quat_z", "1", ""},
		"quaty":        {"quaty", "", ornt, "quat_y", "1", ""},

		// nothing said
		"c12":             {"c12", "c12", misc, "", "", ""},
		"x":               {"x", "x", misc, "", "", ""},
		"left_hand_x":     {"left_hand_x", "left_hand", misc, "x", "", ""},
		"left_hand_x [m]": {"left_hand_x", "left_hand", misc, "x", "", "m"},
		"max":             {"max", "max", misc, "", "", ""},
		"speed [km/h]":    {"speed", "speed", misc, "", "", "km/h"},
		"[g]":             {"[g]", "[g]", misc, "", "", ""},
		"":                {"", "", misc, "", "", ""},
	} {
		got, unit := channels.ParseHeader(header)
		wanted := channels.Channel{Name: want.name, TrackedPoint: want.point, Quantity: want.quantity, Component: want.component, Unit: want.held}
		if diff := cmp.Diff(wanted, got); diff != "" || unit != want.unit {
			t.Errorf("%q: unit %q, want %q; %s", header, unit, want.unit, diff)
		}
	}
}

// Any text is a header. What comes back is a channel held in the unit of its
// quantity, and named by what is left of the text.
func FuzzParseHeader(f *testing.F) {
	for _, seed := range []string{"left_wrist.accel.x [g]", "ax", "left.ornt.quat_w", "", " ", "._", "[](x)", "ÄÖ x", "q"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, header string) {
		c, unit := channels.ParseHeader(header)
		if c.Name == "" && strings.TrimSpace(header) != "" {
			t.Errorf("%q lost its name", header)
		}
		if !strings.Contains(header, c.Name) || !strings.Contains(header, unit) {
			t.Errorf("%q gives name %q and unit %q", header, c.Name, unit)
		}
		if quaternion := strings.HasPrefix(c.Component, "quat_"); c.Unit != c.Quantity.SI() && !quaternion || quaternion && c.Unit != "1" {
			t.Errorf("%q: %s %s in %q", header, c.Quantity, c.Component, c.Unit)
		}
	})
}

func TestChannelIn(t *testing.T) {
	for _, c := range []struct {
		header, unit string
		quantity     channels.Quantity
		held         string
		factor       float64
	}{
		{"ax", "g", channels.Acceleration, "m/s^2", 9.80665}, // 3rd CGPM 1901; ISO 80000-3
		{"ax", "m/s²", channels.Acceleration, "m/s^2", 1},
		{"gx", "deg/s", channels.AngularRate, "rad/s", math.Pi / 180},
		{"tip.pos.x", "mm", channels.Position, "m", 0.001},
		{"knee angle", "deg", channels.JointAngle, "rad", math.Pi / 180},
		{"hip.ornt.x", "deg", channels.Orientation, "rad", math.Pi / 180},
		{"left_hand_x", "cm", channels.Position, "m", 0.01}, // the unit tells the quantity
		{"c0", "deg/s", channels.AngularRate, "rad/s", math.Pi / 180},
	} {
		before, _ := channels.ParseHeader(c.header)
		u, err := channels.ParseUnit(c.unit)
		if err != nil {
			t.Fatal(err)
		}
		got, factor, err := before.In(u)
		if err != nil || got.Quantity != c.quantity || got.Unit != c.held || math.Abs(factor-c.factor) > 1e-15 {
			t.Errorf("%s in %s: %s in %s, factor %v, error %v", c.header, c.unit, got.Quantity, got.Unit, factor, err)
		}
		if got.Name != before.Name || got.TrackedPoint != before.TrackedPoint || got.Component != before.Component {
			t.Errorf("%s in %s became %+v", c.header, c.unit, got)
		}
	}
}

func TestChannelInAnUnfitUnit(t *testing.T) {
	for _, c := range []struct{ header, unit, says string }{
		{"gx", "g", "channel gx is GYRO, which has no unit g"},
		{"ax", "deg/s", "channel ax is ACCEL, which has no unit deg/s"},
		{"tip.pos.x", "m/s", "channel tip.pos.x is POS, which has no unit m/s"},
		{"left.ornt.quat_w", "deg", "left.ornt.quat_w"},
	} {
		before, _ := channels.ParseHeader(c.header)
		u, err := channels.ParseUnit(c.unit)
		if err != nil {
			t.Fatal(err)
		}
		if _, _, err := before.In(u); err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s in %s: error %v, want it to say %q", c.header, c.unit, err, c.says)
		}
	}
}
