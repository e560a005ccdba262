package channels

import "strings"

// Quantity says what a channel measures, in the channel types of the
// Motion-BIDS standard.
type Quantity string

// The channel types of Motion-BIDS that this program tells apart. Misc is a
// channel of unknown quantity: it has no unit and its numbers stay as recorded.
const (
	Acceleration        Quantity = "ACCEL"  // m/s²
	AngularAcceleration Quantity = "ANGACC" // rad/s²
	AngularRate         Quantity = "GYRO"   // rad/s
	JointAngle          Quantity = "JNTANG" // rad
	MagneticField       Quantity = "MAGN"   // T
	Misc                Quantity = "MISC"   // unknown
	Orientation         Quantity = "ORNT"   // rad for angles, 1 for quaternions
	Position            Quantity = "POS"    // m
	Velocity            Quantity = "VEL"    // m/s
)

// quantityWords maps the words found in column headers, lower case, to the
// quantity they stand for.
var quantityWords = map[string]Quantity{
	"accel": Acceleration, "acc": Acceleration, "acceleration": Acceleration, "accelerometer": Acceleration,
	"angacc": AngularAcceleration,
	"gyro":   AngularRate, "gyr": AngularRate, "gyroscope": AngularRate, "angvel": AngularRate,
	"jntang": JointAngle, "angle": JointAngle,
	"magn": MagneticField, "mag": MagneticField, "magnetometer": MagneticField,
	"misc": Misc,
	"ornt": Orientation, "orientation": Orientation, "quat": Orientation, "rot": Orientation,
	"pos": Position, "position": Position,
	"vel": Velocity, "velocity": Velocity,
}

// SI returns the symbol of the unit in which channels of this quantity are
// held, empty for Misc. Quaternion components are pure numbers; see
// [Channel.Unit].
func (q Quantity) SI() string {
	switch q {
	case Acceleration:
		return "m/s^2"
	case AngularAcceleration:
		return "rad/s^2"
	case AngularRate:
		return "rad/s"
	case JointAngle, Orientation:
		return "rad"
	case MagneticField:
		return "T"
	case Position:
		return "m"
	case Velocity:
		return "m/s"
	}
	return ""
}

// Word returns the lower-case word that stands for the quantity in a channel
// name: "accel" for ACCEL.
func (q Quantity) Word() string { return strings.ToLower(string(q)) }
