package channels

import (
	"fmt"
	"regexp"
	"strings"
)

// Channel describes one scalar series of a take.
type Channel struct {
	Name         string   // as the recording names it, without a unit: "left_wrist.accel.x"
	TrackedPoint string   // what is tracked: "left_wrist"; empty when the name does not say
	Quantity     Quantity // what is measured
	Component    string   // "x", "y", "z", "quat_w" …; empty when the name does not say
	Unit         string   // SI symbol the values are held in; empty when the quantity is unknown
}

var (
	unitSuffix = regexp.MustCompile(`^(.*?)\s*[\[(]([^\[\]()]+)[\])]\s*$`)
	fused      = regexp.MustCompile(`^(a|acc|accel|g|gyr|gyro|m|mag|p|pos|v|vel|q|quat)([xyzw])$`)
	separators = regexp.MustCompile(`[._\-\s:/]+`)
)

// fusedQuantity is the reading of headers that join quantity and axis, such as
// "ax" or "gyroz", keyed by the first letter.
var fusedQuantity = map[byte]Quantity{
	'a': Acceleration, 'g': AngularRate, 'm': MagneticField, 'p': Position, 'v': Velocity, 'q': Orientation,
}

// ParseHeader reads a column header as a channel and returns the unit it
// states in brackets, if any: "left_wrist.accel.x [g]" gives the channel
// left_wrist.accel.x and "g". Parts may be joined by dots, underscores, dashes
// or spaces; "ax" and "gyro_z" are understood. A header that says nothing
// gives a Misc channel of that name.
func ParseHeader(header string) (Channel, string) {
	name, unit := strings.TrimSpace(header), ""
	if m := unitSuffix.FindStringSubmatch(name); m != nil && m[1] != "" {
		name, unit = m[1], m[2]
	}
	c := Channel{Name: name, Quantity: Misc}
	words := separators.Split(name, -1)
	lower := separators.Split(strings.ToLower(name), -1)
	n := len(words)
	if m := fused.FindStringSubmatch(lower[n-1]); m != nil {
		c.Quantity, c.Component, n = fusedQuantity[m[1][0]], m[2], n-1
		if c.Quantity == Orientation {
			c.Component = "quat_" + m[2]
		}
	} else {
		if isAxis(lower[n-1]) && n > 1 {
			c.Component, n = lower[n-1], n-1
		}
		if n > 0 {
			if q, ok := quantityWords[lower[n-1]]; ok {
				if lower[n-1] == "quat" && c.Component != "" {
					c.Component = "quat_" + c.Component
				}
				c.Quantity, n = q, n-1
				if n > 0 && quantityWords[lower[n-1]] == q { // left.ornt.quat_w
					n--
				}
			}
		}
	}
	c.TrackedPoint = strings.Join(words[:n], "_")
	c.Unit = c.Quantity.SI()
	if strings.HasPrefix(c.Component, "quat_") {
		c.Unit = "1"
	}
	return c, unit
}

func isAxis(word string) bool {
	return word == "x" || word == "y" || word == "z" || word == "w"
}

// In returns the channel for values recorded in unit u, and the factor that
// turns them into the unit the channel is held in. A Misc channel takes its
// quantity from the unit; a unit of another quantity is an error, and so is
// any unit of a quaternion component, which is a pure number.
func (c Channel) In(u Unit) (Channel, float64, error) {
	switch {
	case strings.HasPrefix(c.Component, "quat_"):
		return c, 0, fmt.Errorf("channel %s is a quaternion component, a pure number, which has no unit %s", c.Name, u.Symbol)
	case c.Quantity == Misc:
		c.Quantity = u.Quantity
	case c.Quantity == u.Quantity:
	case c.Quantity == JointAngle && u.Quantity == Orientation: // both are angles
	default:
		return c, 0, fmt.Errorf("channel %s is %s, which has no unit %s", c.Name, c.Quantity, u.Symbol)
	}
	c.Unit = c.Quantity.SI()
	return c, u.Factor, nil
}
