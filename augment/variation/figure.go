package variation

import (
	"cmp"
	"slices"
)

// Figure is one measured size.
type Figure struct {
	Part  Part   `json:"part"`
	Label string `json:"label,omitempty"` // empty for all labels together
	// Of names the limb (Timing, TimingLength), the channel group or the channel
	// (Noise) the figure is about; empty for the whole take or for all groups
	// together.
	Of   string `json:"of,omitempty"`
	Unit string `json:"unit"`

	Used     float64 `json:"used"`          // the size to make takes with
	Default  bool    `json:"default"`       // Used is a default, for want of data
	Measured float64 `json:"measured"`      // the size that the recordings show; 0 where Default
	Low      float64 `json:"low"`           // lower end of its 95 % interval
	High     float64 `json:"high"`          // upper end
	Raw      float64 `json:"raw"`           // the plain number, before the model was consulted
	Pairs    int     `json:"pairs"`         // pairs of takes behind it; 0 for noise
	Takes    int     `json:"takes"`         // takes behind it
	Why      string  `json:"why,omitempty"` // why it is a default
}

// Kind says whether takes are gestures or stretches of an ongoing motion.
type Kind string

// The two kinds of motion.
const (
	Gesture Kind = "gesture" // begins and ends in rest, or does not repeat
	Ongoing Kind = "ongoing" // a stretch cut out of a motion that repeats
)

// Motion is the kind of motion of one label, or of all.
type Motion struct {
	Label string `json:"label,omitempty"` // empty for all labels together
	Kind  Kind   `json:"kind"`
	// Ends is the median over takes of the mean speed in the stiller of the
	// first and last eighth, relative to that of the whole take.
	Ends float64 `json:"ends"`
	// Periodicity is the median over takes of the rise of the autocorrelation
	// from its lowest point to the highest after it.
	Periodicity float64 `json:"periodicity"`
	Takes       int     `json:"takes"`
}

// Spectrum is how the noise of a channel at rest spreads over frequency.
type Spectrum struct {
	Channel string  `json:"channel"`
	Rate    float64 `json:"rate_hz"` // frame rate
	// Shares holds the share of the variance in equal bands from 0 to half the
	// frame rate. They add up to 1.
	Shares []float64 `json:"shares"`
}

// Coupling is how far two limbs share their timing. It is not measured here
// but kept with the rest.
type Coupling struct {
	A    string  `json:"a"` // limb
	B    string  `json:"b"` // limb
	Rho  float64 `json:"rho"`
	Low  float64 `json:"low"` // 95 % interval
	High float64 `json:"high"`
	P    float64 `json:"p"` // of a permutation test against no coupling
}

// Measured is all that was measured of a set of recordings.
type Measured struct {
	Version  int        `json:"version"` // of this format
	Takes    int        `json:"takes"`
	Labels   int        `json:"labels"`
	Motions  []Motion   `json:"motions"` // all labels first
	Figures  []Figure   `json:"figures"` // all labels first, then by label; in the order of Parts
	Spectra  []Spectrum `json:"spectra"`
	Coupling []Coupling `json:"coupling,omitempty"`
}

// Find returns the figure to use for a part of one label and one limb, group
// or channel. A label that was not measured gets the figure of all labels, a
// group, limb or channel that was not measured that of all together; own tells
// whether it is the very figure asked for. A part of which there is no figure
// gets its default.
func (m *Measured) Find(p Part, label, of string) (f Figure, own bool) {
	for _, key := range [][2]string{{label, of}, {"", of}, {label, ""}, {"", ""}} {
		if i := m.index(p, key[0], key[1]); i >= 0 {
			return m.Figures[i], key == [2]string{label, of}
		}
	}
	return Figure{Part: p, Unit: p.Unit(), Used: p.Default(), Default: true, Why: "not measured"}, false
}

func (m *Measured) index(p Part, label, of string) int {
	return slices.IndexFunc(m.Figures, func(f Figure) bool { return f.Part == p && f.Label == label && f.Of == of })
}

// Motion returns the kind of motion of a label, that of all labels together
// where the label was not measured.
func (m *Measured) Motion(label string) Motion {
	for _, name := range []string{label, ""} {
		if i := slices.IndexFunc(m.Motions, func(k Motion) bool { return k.Label == name }); i >= 0 {
			return m.Motions[i]
		}
	}
	return Motion{Kind: Gesture}
}

// sort puts figures into the order of the table.
func (m *Measured) sort() {
	order := Parts()
	slices.SortStableFunc(m.Figures, func(a, b Figure) int {
		return cmp.Or(cmp.Compare(a.Label, b.Label), cmp.Compare(slices.Index(order, a.Part), slices.Index(order, b.Part)))
	})
}
