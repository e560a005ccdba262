package variation

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
)

// Write writes the measurement as JSON, indented, in the form that [Read]
// reads. The keys are those of [Measured] and its parts.
func (m *Measured) Write(w io.Writer) error {
	text, err := json.MarshalIndent(m, "", " ")
	if err != nil {
		return fmt.Errorf("store variation: %w", err)
	}
	_, err = w.Write(append(text, '\n'))
	return err
}

// Read reads a measurement written by [Measured.Write]. A key that is not
// known, another version, a part or kind of another name and a size that
// cannot be are errors.
func Read(r io.Reader) (*Measured, error) {
	d := json.NewDecoder(r)
	d.DisallowUnknownFields()
	m := new(Measured)
	if err := d.Decode(m); err != nil {
		return nil, fmt.Errorf("read variation: %w", err)
	}
	if _, err := d.Token(); !errors.Is(err, io.EOF) {
		return nil, errors.New("read variation: something follows the measurement; a file holds one")
	}
	if err := m.Validate(); err != nil {
		return nil, fmt.Errorf("read variation: %w", err)
	}
	return m, nil
}

// Validate reports the first thing in a measurement that cannot be.
func (m *Measured) Validate() error {
	if m.Version != format {
		return fmt.Errorf("version %d; this program reads version %d", m.Version, format)
	}
	for _, k := range m.Motions {
		if k.Kind != Gesture && k.Kind != Ongoing {
			return fmt.Errorf("kind %q of label %q; legal kinds are %s and %s", k.Kind, k.Label, Gesture, Ongoing)
		}
	}
	for i, f := range m.Figures {
		if !slices.Contains(Parts(), f.Part) {
			return fmt.Errorf("figure %d: unknown part %q; legal parts are %q", i+1, f.Part, Parts())
		}
		if first := m.index(f.Part, f.Label, f.Of); first != i {
			return fmt.Errorf("figure %d: %s comes twice, first as figure %d", i+1, f.name(), first+1)
		}
		if err := f.validate(); err != nil {
			return fmt.Errorf("figure %d: %s: %w", i+1, f.name(), err)
		}
	}
	return m.validateRest()
}

// validate reports a size outside what its part can have.
func (f Figure) validate() error {
	most := math.Inf(1)
	switch f.Part {
	case Timing, Duration, Amplitude, Gain, ChannelGain, Offset, Shape:
		most = 3
	case Orientation:
		most = math.Pi
	case TimingLength, ShapeLength, Straighten:
		most = 1
	case Trim:
		most = 0.5
	}
	for _, v := range []float64{f.Used, f.Measured, f.Low, f.High, f.Raw} {
		if !(v >= 0) || math.IsInf(v, 1) {
			return fmt.Errorf("%g is not a size", v)
		}
	}
	if f.Used > most {
		return fmt.Errorf("used %g; it must lie between 0 and %g", f.Used, most)
	}
	if (f.Part == TimingLength || f.Part == ShapeLength) && f.Used < 0.01 {
		return fmt.Errorf("used %g; it must lie between 0.01 and 1", f.Used)
	}
	return nil
}

func (m *Measured) validateRest() error {
	for _, s := range m.Spectra {
		total := 0.0
		for _, x := range s.Shares {
			if !(x >= 0 && x <= 1) {
				return fmt.Errorf("spectrum of channel %s: a share of %g; shares lie between 0 and 1", s.Channel, x)
			}
			total += x
		}
		if len(s.Shares) == 0 || total > 0 && math.Abs(total-1) > 1e-6 {
			return fmt.Errorf("spectrum of channel %s: %d shares that add up to %g; they must add up to 1", s.Channel, len(s.Shares), total)
		}
	}
	for _, c := range m.Coupling {
		if !(math.Abs(c.Rho) <= 1) {
			return fmt.Errorf("coupling of %s and %s: rho %g; it must lie between -1 and 1", c.A, c.B, c.Rho)
		}
	}
	return nil
}

// name says what a figure is about.
func (f Figure) name() string {
	text := string(f.Part)
	if f.Of != "" {
		text += " of " + f.Of
	}
	if f.Label != "" {
		text += " in label " + f.Label
	}
	return text
}
