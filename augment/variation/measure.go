package variation

import (
	"context"
	"errors"
	"fmt"
	"math"

	"strandwise/channels"
)

// format is the version of the form in which a measurement is stored.
const format = 1

// Measure measures how the recorded takes differ within their labels. The
// takes must share one layout, whose groups hold every channel, and scales
// must have counted takes of that layout. Of a label with one take only the
// kind of motion and the noise are measured. The result depends on the takes
// and the options but for their order and the number of workers.
func Measure(ctx context.Context, takes []*channels.Take, scales *channels.Scales, o Options) (*Measured, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	if err := check(takes); err != nil {
		return nil, fmt.Errorf("measure variation: %w", err)
	}
	f := newForm(takes[0].Layout, scales, o.Frames)
	e := &engine{form: f, o: o, labels: f.gather(takes), columns: f.columns()}
	for _, l := range e.labels {
		e.freedom = append(e.freedom, float64(len(l.takes)-1))
	}
	m := &Measured{Version: format, Takes: len(takes), Labels: len(e.labels), Motions: e.motions()}
	rest := e.noise(m)
	if err := e.figures(ctx, m, rest); err != nil {
		return nil, err
	}
	m.sort()
	return m, nil
}

// check reports the first take that cannot be measured with the others.
func check(takes []*channels.Take) error {
	if len(takes) == 0 {
		return errors.New("there are no takes")
	}
	layout := takes[0].Layout
	if len(layout.Groups) == 0 {
		return errors.New("the channels are in no groups; group them first")
	}
	for _, t := range takes {
		if t.Layout != layout {
			return fmt.Errorf("takes %s and %s do not share their channels; measure recordings of one layout at a time", takes[0].ID, t.ID)
		}
		if err := t.Validate(); err != nil {
			return err
		}
	}
	return nil
}

// figures measures the pairs of takes and adds what they tell.
func (e *engine) figures(ctx context.Context, m *Measured, noise []float64) error {
	sheet := e.recorded()
	if len(sheet.pairs) == 0 {
		e.defaults(m)
		return nil
	}
	scopes := e.scopes()
	all := e.evidence(sheet, scopes[0])
	calibrations, err := e.calibrate(ctx, all, noise)
	if err != nil {
		return err
	}
	e.scope(m, all, scopes[0], calibrations[0])
	e.straighten(m)
	for i, sc := range scopes[1:] {
		if err := ctx.Err(); err != nil {
			return err
		}
		if sheet.start[sc.from] < sheet.start[sc.to] {
			e.scope(m, e.evidence(sheet, sc), sc, calibrations[i+1])
		}
	}
	return nil
}

// defaults adds the documented sizes, for recordings without two takes of one
// label.
func (e *engine) defaults(m *Measured) {
	for _, p := range Parts() {
		if p != Noise {
			m.Figures = append(m.Figures, Figure{Part: p, Unit: p.Unit(), Used: p.Default(), Default: true, Why: "no label has two takes"})
		}
	}
}

// scope adds the figures of one label, or of all.
func (e *engine) scope(m *Measured, ev evidence, sc scope, cal calibration) {
	for i, c := range e.columns.list {
		if c.part != c.source() {
			continue
		}
		f := Figure{
			Part: c.part, Label: sc.label, Of: c.of, Unit: c.part.Unit(), Raw: c.raw(ev.squares[i]),
			Pairs: ev.pairs, Takes: ev.takes,
		}
		reps := make([]float64, len(ev.replicas))
		for k, r := range ev.replicas {
			reps[k] = r[i]
		}
		w := spread(reps, leastSpread(ev.freedom*c.pieces), ev.freedom)
		f.Measured = cal.size(i, ev.squares[i])
		f.Low, f.High = cal.size(i, ev.squares[i]*math.Exp(-w)), cal.size(i, ev.squares[i]*math.Exp(w))
		if c.part == Timing {
			m.addTiming(f, e.timingLengths(i, cal), ev)
		} else {
			m.add(f, ev.freedom)
		}
		if c.part == Shape && c.of == "" {
			m.addLength(f, ShapeLength, e.shapeLengths(cal), ev)
		}
	}
	if sc.label == "" {
		f := Figure{Part: ChannelGain, Unit: ChannelGain.Unit(), Used: ChannelGain.Default(), Default: true, Why: "not measured"}
		m.Figures = append(m.Figures, f)
	}
}

// addLength adds the figure of a correlation length, of the same label and limb
// as f, and returns it. A length that does not show is NaN in it.
func (m *Measured) addLength(f Figure, p Part, l lengths, ev evidence) Figure {
	f.Part, f.Unit, f.Raw = p, p.Unit(), l.plain(ev.squares)
	f.Measured, f.Low, f.High = l.find(ev, m.towards(p, f.Label, f.Of))
	m.add(f, ev.freedom)
	return f
}

// addTiming adds the figures of timing and of its correlation length. What the
// takes show of timing is its size about each take's mean; the longer the
// process is, the more of it a mean takes away.
func (m *Measured) addTiming(f Figure, l lengths, ev evidence) {
	length := m.addLength(f, TimingLength, l, ev)
	if math.IsNaN(length.Measured) {
		length.Measured = m.towards(TimingLength, f.Label, f.Of)
		length.Low, length.High = length.Measured, length.Measured
	}
	left := within(length.Measured)
	// The two do not depend on each other, so their errors add up in squares.
	down := math.Hypot(math.Log(f.Measured/f.Low), math.Log(within(length.Low)/left))
	up := math.Hypot(math.Log(f.High/f.Measured), math.Log(left/within(length.High)))
	size := f.Measured / left
	if size == 0 { // there is no logarithm
		f.Low, f.High = 0, f.High/left
	} else {
		f.Low, f.High = size*math.Exp(-down), size*math.Exp(up)
	}
	f.Measured = size
	m.add(f, ev.freedom)
}

// towards returns the size towards which a figure is drawn: the default for
// all labels together, and for a label that of all.
func (m *Measured) towards(p Part, label, of string) float64 {
	if label == "" {
		return p.Default()
	}
	all, _ := m.Find(p, "", of)
	return all.Used
}

// add settles what size to use and adds the figure.
func (m *Measured) add(f Figure, freedom float64) {
	towards := m.towards(f.Part, f.Label, f.Of)
	switch {
	case math.IsNaN(f.Raw):
		f.Measured, f.Why = f.Raw, "no pair of takes tells it"
	case math.IsNaN(f.Measured), f.High == 0 && f.Raw > 0:
		f.Measured, f.Why = math.NaN(), "hidden by what else differs"
	}
	f.Used = shrunk(f.Part.serving(f.Raw, f.Measured), towards, freedom)
	if math.IsNaN(f.Measured) {
		f.Measured, f.Low, f.High = 0, 0, 0
	}
	if f.Default = math.IsNaN(f.Used); f.Default {
		f.Used = towards
	}
	if math.IsNaN(f.Raw) {
		f.Raw = 0
	}
	m.Figures = append(m.Figures, f)
}
