package puppets

const (
	leftHand = iota
	rightHand
	hands
)

// A place is a posture that strokes lead to.
type place int

const (
	home place = iota
	low
	high
	ahead
	aheadOver // palm up
	homeOver  // palm up
	shakeUp
	shakeDown
	placesLen
)

// places gives the joints of each place in degrees: flexion, abduction,
// rotation, elbow, pronation.
var places = [placesLen]posture{
	home:      {15, 10, 15, 85, 40},
	low:       {20, 12, 8, 50, 55},
	high:      {95, 22, 0, 55, 25},
	ahead:     {62, 6, 15, 38, 45},
	aheadOver: {60, 8, 12, 40, -45},
	homeOver:  {18, 10, 15, 85, -45},
	shakeUp:   {35, 20, 20, 105, 35},
	shakeDown: {40, 20, 15, 62, 35},
}

// beat is one stroke of a cue and the rest after it, both in seconds.
type beat struct {
	to         place
	time, rest float64
}

// cue is one two-handed gesture. A cue timed together has as many beats for
// either hand, with equal times.
type cue struct {
	label    string
	together bool
	beats    [hands][]beat
}

// cues returns the six cues in alphabetical order.
func cues() []cue {
	drop := []beat{{high, 0.40, 0.10}, {low, 0.65, 0.05}, {home, 0.35, 0}}
	raise := []beat{{low, 0.35, 0.05}, {high, 0.65, 0.10}, {home, 0.40, 0}}
	hold := []beat{{ahead, 0.45, 0.50}, {home, 0.45, 0}}
	return []cue{
		{"drop-curtain", true, [hands][]beat{drop, drop}},
		{"light-lantern", false, [hands][]beat{hold, {{ahead, 0.40, 0.10}, {aheadOver, 0.35, 0.10}, {home, 0.45, 0}}}},
		{"rain-patter", false, [hands][]beat{shakes(3, 0.29), shakes(3, 0.29)}},
		{"raise-curtain", true, [hands][]beat{raise, raise}},
		{"snuff-lantern", false, [hands][]beat{hold, {{homeOver, 0.35, 0.10}, {aheadOver, 0.40, 0.10}, {home, 0.45, 0}}}},
		{"thunder-roll", true, [hands][]beat{shakes(3, 0.22), shakes(3, 0.22)}},
	}
}

// shakes lists n shakes up and down of the given time per stroke, and the way
// home.
func shakes(n int, time float64) []beat {
	var out []beat
	for range n {
		out = append(out, beat{shakeUp, time, 0}, beat{shakeDown, time, 0})
	}
	return append(out, beat{home, 0.40, 0})
}
