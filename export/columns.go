package export

import (
	"fmt"

	"strandwise/channels"
)

// described is what a reader wants to know of one column of a table's own.
type described struct{ text, unit string }

// ownColumn describes the columns of the tables that are not channels, by name.
// The same name means the same in every table.
func ownColumn(name string) described {
	switch name {
	case "id":
		return described{"id of the take, which no other has", ""}
	case "take":
		return described{"id of the take", ""}
	case "label":
		return described{"what was performed", ""}
	case "subject":
		return described{"by whom; may be empty", ""}
	case "session":
		return described{"on which occasion; may be empty", ""}
	case "origin":
		return described{"recorded or synthetic", ""}
	case "source":
		return described{"id of the recorded take that a synthetic one was made from", ""}
	case "draw":
		return described{"which draw of the source take a synthetic take is, from 0", ""}
	case "rank":
		return described{"place of a synthetic take among those of its source, the most useful first, from 0", ""}
	case "method":
		return described{"how a synthetic take was made", ""}
	case "parameters":
		return described{"what was drawn for a synthetic take, a JSON object", ""}
	case "frames":
		return described{"number of frames; of a window those before its padding", ""}
	case "rate_hz":
		return described{"mean frame rate of the take", "Hz"}
	case "start_s":
		return described{"clock of the first frame", "s"}
	case "time_s":
		return described{"clock of each frame: in the table takes from the first frame on", "s"}
	case "frame":
		return described{"number of the frame in its take, from 0", ""}
	case "window":
		return described{"number of the window in its take, from 0", ""}
	}
	return described{name, ""}
}

// channelColumn describes the column of a channel.
func channelColumn(c Channel) described {
	text := quantityName(c.Quantity)
	if c.Component != "" {
		text += " " + c.Component
	}
	if c.TrackedPoint != "" {
		text += " of " + c.TrackedPoint
	}
	if c.Unit == "" {
		return described{fmt.Sprintf("channel %s: %s", c.Name, text), ""}
	}
	return described{fmt.Sprintf("channel %s: %s in %s", c.Name, text, c.Unit), c.Unit}
}

// quantityName returns a quantity in words.
func quantityName(q channels.Quantity) string {
	switch q {
	case channels.Acceleration:
		return "acceleration"
	case channels.AngularAcceleration:
		return "angular acceleration"
	case channels.AngularRate:
		return "angular rate"
	case channels.JointAngle:
		return "joint angle"
	case channels.MagneticField:
		return "magnetic field"
	case channels.Orientation:
		return "orientation"
	case channels.Position:
		return "position"
	case channels.Velocity:
		return "velocity"
	}
	return "unknown quantity"
}
