package body

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"
)

// Freedom is one way a joint moves in the frame of its parent: along an axis or
// about it. A joint's turns follow one another about its own axes, in order.
type Freedom int

// The freedoms.
const (
	MoveX Freedom = iota
	MoveY
	MoveZ
	TurnX
	TurnY
	TurnZ
)

var freedomNames = [...]string{"move_x", "move_y", "move_z", "turn_x", "turn_y", "turn_z"}

// Axis returns the axis it is along or about.
func (f Freedom) Axis() Axis { return Axis(f % 3) }

// IsTurn tells a turn from a move.
func (f Freedom) IsTurn() bool { return f >= TurnX }

func (f Freedom) turns() bool { return f.IsTurn() }
func (f Freedom) moves() bool { return !f.IsTurn() }
func (f Freedom) known() bool { return f >= MoveX && f <= TurnZ }

// String returns the name of the freedom: "turn_x".
func (f Freedom) String() string {
	if !f.known() {
		return fmt.Sprintf("Freedom(%d)", int(f))
	}
	return freedomNames[f]
}

// MarshalText writes the name of the freedom.
func (f Freedom) MarshalText() ([]byte, error) {
	if !f.known() {
		return nil, fmt.Errorf("unknown freedom %d", int(f))
	}
	return []byte(f.String()), nil
}

// UnmarshalText reads the name of a freedom.
func (f *Freedom) UnmarshalText(text []byte) error {
	i := slices.Index(freedomNames[:], string(text))
	if i < 0 {
		return fmt.Errorf("unknown freedom %q; legal ones are %s", text, strings.Join(freedomNames[:], ", "))
	}
	*f = Freedom(i)
	return nil
}

// document is a joint as JSON.
type document struct {
	Name     string     `json:"name"`
	Parent   int        `json:"parent"`
	Offset   [3]float64 `json:"offset_m"`
	End      bool       `json:"end,omitempty"`
	Freedoms []Freedom  `json:"freedoms,omitzero"`
	Absolute bool       `json:"absolute,omitempty"`
}

// MarshalJSON writes the joint as shown at [Skeleton].
func (j Joint) MarshalJSON() ([]byte, error) {
	return json.Marshal(document{j.Name, j.Parent, [3]float64{j.Offset.X, j.Offset.Y, j.Offset.Z}, j.End, j.Freedoms, j.Absolute})
}

// UnmarshalJSON reads the joint as shown at [Skeleton]. Whether it fits its
// skeleton is checked by [Skeleton.Validate].
func (j *Joint) UnmarshalJSON(text []byte) error {
	var d document
	if err := json.Unmarshal(text, &d); err != nil {
		return err
	}
	*j = Joint{d.Name, d.Parent, r3.Vec{X: d.Offset[0], Y: d.Offset[1], Z: d.Offset[2]}, d.End, d.Freedoms, d.Absolute}
	return nil
}
