package channels

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// StandardGravity is the conventional acceleration of free fall in m/s²,
// exact by definition (3rd CGPM, 1901; ISO 80000-3).
const StandardGravity = 9.80665

// Unit is a unit a recording may state. A value v in it is v·Factor in the SI
// unit of its quantity.
type Unit struct {
	Symbol   string   // as written in this package: "g", "deg/s", "mm"
	Quantity Quantity // what a channel in this unit measures
	Factor   float64  // SI units per unit
}

// units lists every unit understood, with the spellings seen in headers. The
// inch is 25.4 mm exactly (international yard and pound agreement, 1959), the
// gauss 1e-4 T.
var units = []struct {
	Unit
	spellings []string
}{
	{Unit{"m/s^2", Acceleration, 1}, []string{"m/s^2", "m/s2", "m/s²", "m/s/s", "m s^-2", "ms-2", "m.s-2", "m·s⁻²"}},
	{Unit{"g", Acceleration, StandardGravity}, []string{"g", "g0", "gee"}},
	{Unit{"mg", Acceleration, StandardGravity / 1000}, []string{"mg", "milli-g"}},
	{Unit{"rad/s^2", AngularAcceleration, 1}, []string{"rad/s^2", "rad/s2", "rad/s²"}},
	{Unit{"rad/s", AngularRate, 1}, []string{"rad/s", "rads-1", "rad s^-1", "rad·s⁻¹"}},
	{Unit{"deg/s", AngularRate, math.Pi / 180}, []string{"deg/s", "°/s", "dps", "degrees/s", "deg s^-1"}},
	{Unit{"mdeg/s", AngularRate, math.Pi / 180000}, []string{"mdeg/s", "mdps"}},
	{Unit{"m", Position, 1}, []string{"m", "metre", "meter", "metres", "meters"}},
	{Unit{"cm", Position, 0.01}, []string{"cm"}},
	{Unit{"mm", Position, 0.001}, []string{"mm"}},
	{Unit{"in", Position, 0.0254}, []string{"in", "inch", "inches"}},
	{Unit{"m/s", Velocity, 1}, []string{"m/s"}},
	{Unit{"mm/s", Velocity, 0.001}, []string{"mm/s"}},
	{Unit{"rad", Orientation, 1}, []string{"rad", "radians"}},
	{Unit{"deg", Orientation, math.Pi / 180}, []string{"deg", "°", "degrees"}},
	{Unit{"T", MagneticField, 1}, []string{"t", "tesla"}},
	{Unit{"mT", MagneticField, 1e-3}, []string{"mt"}},
	{Unit{"uT", MagneticField, 1e-6}, []string{"ut", "µt", "μt"}},
	{Unit{"gauss", MagneticField, 1e-4}, []string{"gauss"}},
}

// ParseUnit reads a unit symbol in any of its usual spellings, upper or lower
// case: "g", "m/s²", "DEG/S", "mm". The error lists what would be legal.
func ParseUnit(symbol string) (Unit, error) {
	want := strings.ToLower(strings.TrimSpace(symbol))
	for _, u := range units {
		if slices.Contains(u.spellings, want) {
			return u.Unit, nil
		}
	}
	return Unit{}, fmt.Errorf("unknown unit %q; legal units are %s", symbol, strings.Join(UnitSymbols(), ", "))
}

// UnitSymbols lists the symbols of every unit understood.
func UnitSymbols() []string {
	out := make([]string, len(units))
	for i, u := range units {
		out[i] = u.Symbol
	}
	return out
}
