package job

import (
	"context"
	"errors"
	"os"
	"strconv"
	"strings"

	"github.com/spf13/pflag"

	"strandwise/augment"
	"strandwise/augment/gate"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/chart"
	"strandwise/channels/group"
	"strandwise/classify"
	"strandwise/export/marks"
)

// making is how a plan makes takes.
type making struct {
	variation augment.Variation
	gates     gate.Options
	limits    map[string][2]float64
	measured  *variation.Measured // read from a file; nil, and takes are measured
	seed      uint64
}

// making reads the keys that say how takes are made.
func (p *Plan) making() (*making, error) {
	m := &making{seed: p.Seed}
	var err error
	if m.variation, err = p.variation(); err != nil {
		return nil, err
	}
	if m.gates, err = p.gates(); err != nil {
		return nil, err
	}
	if m.limits, err = p.limits(); err != nil {
		return nil, err
	}
	if m.variation.Dropped, err = p.dropped(); err != nil {
		return nil, err
	}
	if p.Variation != "" {
		file, err := os.Open(p.Variation)
		if err != nil {
			return nil, p.fault("variation", "%v", err)
		}
		defer file.Close()
		if m.measured, err = variation.Read(file); err != nil {
			return nil, p.fault("variation", "%s: %v", p.Variation, err)
		}
	}
	return m, nil
}

// dropped reads which takes a person dropped from the set of an earlier run.
func (p *Plan) dropped() (map[string]bool, error) {
	if p.Marks == "" {
		return nil, nil
	}
	given, err := marks.Read(p.Marks)
	if err != nil {
		return nil, p.fault("marks", "%v", err)
	}
	out := make(map[string]bool)
	for id, mark := range given {
		if mark == marks.Drop {
			out[id] = true
		}
	}
	return out, nil
}

// variation reads the keys that say how takes vary.
func (p *Plan) variation() (augment.Variation, error) {
	v := augment.Default()
	var err error
	if v.Blend, err = augment.ParseBlend(p.Method); err != nil {
		return v, p.fault("method", "%v", err)
	}
	v.Reach, v.Kind, v.Timing = p.Reach, augment.Kind(p.Kind), augment.Timing(p.Timing)
	v.Knots, v.Spread, v.TimeShare = p.Knots, p.Spread, p.TimeShare
	if !p.given["spread"] && len(v.Blend) == 1 && v.Blend[0].Method != augment.Recipe {
		v.Spread = augment.Published(v.Blend[0].Method).Spread
	}
	v.Mix, v.PathShare, v.FreeFeet, v.Spare = p.Mix, p.PathShare, p.FreeFeet, p.Spare
	for _, part := range variation.Parts() {
		if key := sizeKey(part); p.given[key] {
			v.Sizes[part] = *p.size(part)
		}
	}
	if p.Coupling != measured {
		rho, err := strconv.ParseFloat(p.Coupling, 64)
		if err != nil {
			return v, p.fault("coupling", "%q is neither a number from 0 to 1 nor measured", p.Coupling)
		}
		v.Coupling = &rho
	}
	var outside *augment.RangeError
	if errors.As(v.Validate(), &outside) {
		return v, p.fault(outside.Field, "%s", outside.Problem)
	}
	return v, nil
}

// measured is what a key says that leaves its value to measuring.
const measured = "measured"

// gates reads the key that sets gates, each NAME=THRESHOLD or NAME=off.
func (p *Plan) gates() (gate.Options, error) {
	o := gate.Default()
	thresholds := map[gate.Gate]*float64{
		gate.Range: &o.Range, gate.Jerk: &o.Jerk, gate.Bandwidth: &o.Bandwidth,
		gate.Bones: &o.Bones, gate.Stray: &o.Stray, gate.Copy: &o.Copy,
	}
	for _, rule := range p.Gate {
		name, text, _ := strings.Cut(rule, "=")
		if name == "all" && text == "off" {
			o.Off = gate.All()
			continue
		}
		g, err := gate.Parse(strings.TrimSpace(name))
		if err != nil {
			return o, p.fault("gate", "%v", err)
		}
		if text = strings.TrimSpace(text); text == "off" {
			o.Off = append(o.Off, g)
			continue
		}
		value, err := strconv.ParseFloat(text, 64)
		if err != nil || thresholds[g] == nil {
			return o, p.fault("gate", "%q is neither GATE=THRESHOLD nor GATE=off, such as jerk=3 or copy=off", rule)
		}
		*thresholds[g] = value
	}
	if err := o.Validate(); err != nil {
		return o, p.fault("gate", "%v", err)
	}
	return o, nil
}

// limits reads the key that says between which values a channel stays, each
// CHANNEL=LOW..HIGH.
func (p *Plan) limits() (map[string][2]float64, error) {
	out := make(map[string][2]float64)
	for _, rule := range p.Limit {
		name, span, _ := strings.Cut(rule, "=")
		low, high, _ := strings.Cut(span, "..")
		a, err := strconv.ParseFloat(strings.TrimSpace(low), 64)
		b, err2 := strconv.ParseFloat(strings.TrimSpace(high), 64)
		if err != nil || err2 != nil || !(a < b) {
			return nil, p.fault("limit", "%q is not CHANNEL=LOW..HIGH, such as grip=0..1", rule)
		}
		out[strings.TrimSpace(name)] = [2]float64{a, b}
	}
	return out, nil
}

// effort is how thoroughly takes are measured.
type effort int

// Measure measures to print intervals, grow to make takes, and a score to make
// takes in every split anew.
const (
	thorough effort = iota
	ready
	brief
)

// options returns how much work a measurement does.
func (e effort) options(seed uint64) variation.Options {
	o := variation.Default()
	o.Seed = seed
	switch e {
	case ready:
		o.Pairs, o.Total, o.Draws, o.Weights = 100, 400, 400, 50
	case brief:
		o.Pairs, o.Total, o.Draws, o.Weights, o.Workers = 20, 100, 100, 20, 1
	}
	return o
}

// learn returns what a maker is to know of these training takes: their sizes,
// how they differ, how limbs are coupled, and the gates. Scales counts every
// training take, of which these are a bounded number of each label.
func (m *making) learn(ctx context.Context, takes []*channels.Take, scales *channels.Scales, e effort) (augment.Training, error) {
	t := augment.Training{Scales: scales, Takes: takes, Measured: m.measured}
	if len(takes) == 0 {
		return t, nil
	}
	layout := takes[0].Layout
	t.Chart.Limits = m.limits
	if takes[0].Skeleton == nil {
		t.Chart.Bones = chart.FindBones(layout, takes)
	}
	if t.Measured == nil {
		var err error
		if t.Measured, err = variation.Measure(ctx, takes, scales, e.options(m.seed)); err != nil {
			return t, err
		}
	}
	if m.variation.Coupling == nil && len(layout.Limbs()) > 1 {
		t.Coupling = group.MeasureCoupling(takes, scales, m.seed)
	}
	gates := m.gates
	gates.BoneList = gateBones(layout, t.Chart.Bones)
	var err error
	t.Gates, err = gate.Fit(takes, scales, gates)
	return t, err
}

// gateBones returns bones as the channels of their ends.
func gateBones(l *channels.Layout, bones []chart.Bone) []gate.Bone {
	var out []gate.Bone
	for _, b := range bones {
		out = append(out, gate.Bone{Name: b.Parent + "–" + b.Point, From: places(l, b.Parent), To: places(l, b.Point)})
	}
	return out
}

// places returns the position channels of a tracked point.
func places(l *channels.Layout, point string) []int {
	var out []int
	for i, c := range l.Channels {
		if c.TrackedPoint == point && c.Quantity == channels.Position {
			out = append(out, i)
		}
	}
	return out
}

// method is a variation under a name, fitted to the training takes of each
// split.
func (m *making) method(name string) classify.Method {
	return classify.Method{Name: name, Fit: func(training []*channels.Take) (classify.Maker, error) {
		scales := new(channels.Scales)
		for _, t := range training {
			scales.Add(t)
		}
		known, err := m.learn(context.Background(), training, scales, brief)
		if err != nil {
			return nil, err
		}
		return augment.NewMaker(m.variation, known, m.seed)
	}}
}

// published returns how a published method makes takes: as published, with
// nothing measured and no gates.
func (m *making) published(name augment.Method) *making {
	one := 1.0
	out := &making{variation: augment.Published(name), gates: gate.Options{Off: gate.All()}, measured: new(variation.Measured), seed: m.seed}
	out.variation.Coupling = &one
	return out
}

// sizeKey returns the key by which a plan states a size of variation.
func sizeKey(part variation.Part) string {
	if part == variation.Timing {
		return "timing_spread" // timing is how it is drawn
	}
	return strings.ReplaceAll(string(part), " ", "_")
}

// size returns the field that holds a size of variation.
func (p *Plan) size(part variation.Part) *float64 {
	return map[variation.Part]*float64{
		variation.Timing: &p.TimingSpread, variation.TimingLength: &p.TimingLength, variation.Trim: &p.Trim,
		variation.Duration: &p.Duration, variation.Orientation: &p.Orientation, variation.Amplitude: &p.Amplitude,
		variation.Gain: &p.Gain, variation.ChannelGain: &p.ChannelGain, variation.Offset: &p.Offset,
		variation.Shape: &p.Shape, variation.ShapeLength: &p.ShapeLength, variation.Straighten: &p.Straighten, variation.Noise: &p.Noise,
	}[part]
}

// sizeFlags adds the flags that state a size in place of what is measured.
func (p *Plan) sizeFlags(f *pflag.FlagSet) {
	for part, what := range map[variation.Part]string{
		variation.Timing:       "deviation of the log rate at which a take is played",
		variation.TimingLength: "correlation length of that rate, as a fraction of the take",
		variation.Trim:         "deviation of the shift of start and end, as a fraction of the take",
		variation.Duration:     "deviation of the log duration",
		variation.Orientation:  "deviation of the angle in rad by which a take is turned",
		variation.Amplitude:    "deviation of the log size of a group's movement",
		variation.Gain:         "deviation of a factor on it that changes during the take",
		variation.ChannelGain:  "deviation of such a factor of a single channel",
		variation.Offset:       "deviation of a channel's mean, in sizes of its group",
		variation.Shape:        "deviation of a slow drift of a channel, in sizes of its group",
		variation.ShapeLength:  "correlation length of that drift, as a fraction of the take",
		variation.Straighten:   "strength of displacement normalisation, 0 to 1",
		variation.Noise:        "sensor noise added, as a multiple of that measured at rest",
	} {
		f.Float64Var(p.size(part), strings.ReplaceAll(sizeKey(part), "_", "-"), 0, what+" (default: as measured)")
	}
}
