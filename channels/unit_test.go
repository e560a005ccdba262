package channels_test

import (
	"math"
	"strings"
	"testing"

	"strandwise/channels"
)

func TestParseUnit(t *testing.T) {
	const degree = math.Pi / 180
	for _, c := range []struct {
		spellings string // parted by |
		symbol    string
		quantity  channels.Quantity
		factor    float64
	}{
		{"m/s^2|m/s2|m/s²|M/S^2|m/s/s| m/s^2 ", "m/s^2", channels.Acceleration, 1},
		{"g|G|g0", "g", channels.Acceleration, 9.80665}, // exact: 3rd CGPM 1901; ISO 80000-3
		{"mg", "mg", channels.Acceleration, 0.00980665},
		{"rad/s^2|rad/s²", "rad/s^2", channels.AngularAcceleration, 1},
		{"rad/s|RAD/S", "rad/s", channels.AngularRate, 1},
		{"deg/s|DEG/S|°/s|dps|degrees/s", "deg/s", channels.AngularRate, degree},
		{"mdeg/s|mdps", "mdeg/s", channels.AngularRate, degree / 1000},
		{"m|metre|Meters", "m", channels.Position, 1},
		{"cm", "cm", channels.Position, 0.01},
		{"mm|MM", "mm", channels.Position, 0.001},
		{"in|inch|inches", "in", channels.Position, 0.0254}, // exact: international yard and pound agreement, 1959
		{"m/s", "m/s", channels.Velocity, 1},
		{"mm/s", "mm/s", channels.Velocity, 0.001},
		{"rad|radians", "rad", channels.Orientation, 1},
		{"deg|°|Degrees", "deg", channels.Orientation, degree},
		{"T|tesla", "T", channels.MagneticField, 1},
		{"mT", "mT", channels.MagneticField, 1e-3},
		{"uT|µT|μT", "uT", channels.MagneticField, 1e-6}, // micro sign and Greek mu
		{"gauss|Gauss", "gauss", channels.MagneticField, 1e-4},
	} {
		for spelling := range strings.SplitSeq(c.spellings, "|") {
			got, err := channels.ParseUnit(spelling)
			if err != nil || got.Symbol != c.symbol || got.Quantity != c.quantity || math.Abs(got.Factor-c.factor) > 1e-15*c.factor {
				t.Errorf("%q: %+v, %v; want %s of %s, factor %v", spelling, got, err, c.symbol, c.quantity, c.factor)
			}
		}
	}
}

func TestParseUnknownUnit(t *testing.T) {
	for _, symbol := range []string{"", "furlong", "km/h", "m / s"} {
		_, err := channels.ParseUnit(symbol)
		if err == nil {
			t.Errorf("%q was read as a unit", symbol)
			continue
		}
		for _, legal := range append(channels.UnitSymbols(), symbol) {
			if !strings.Contains(err.Error(), legal) {
				t.Errorf("%q: the error does not name %q: %v", symbol, legal, err)
			}
		}
	}
}

// Every symbol is read as itself, and every quantity is held in a unit that is
// understood and has the factor 1.
func TestUnitsAreConsistent(t *testing.T) {
	for _, symbol := range channels.UnitSymbols() {
		if u, err := channels.ParseUnit(symbol); err != nil || u.Symbol != symbol {
			t.Errorf("%q is read as %q, %v", symbol, u.Symbol, err)
		}
	}
	for _, q := range []channels.Quantity{
		channels.Acceleration, channels.AngularAcceleration, channels.AngularRate, channels.JointAngle,
		channels.MagneticField, channels.Orientation, channels.Position, channels.Velocity,
	} {
		u, err := channels.ParseUnit(q.SI())
		if err != nil || u.Factor != 1 || u.Quantity != q && q != channels.JointAngle {
			t.Errorf("%s is held in %q, read as %+v, %v", q, q.SI(), u, err)
		}
		if c, _ := channels.ParseHeader("point." + q.Word() + ".x"); c.Quantity != q {
			t.Errorf("the word %q in a name is read as %s, want %s", q.Word(), c.Quantity, q)
		}
	}
	if si := channels.Misc.SI(); si != "" {
		t.Errorf("a channel of unknown quantity is held in %q", si)
	}
}
