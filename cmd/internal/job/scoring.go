package job

import (
	"slices"
	"strconv"
	"strings"

	"strandwise/classify"
	"strandwise/classify/convolution"
	"strandwise/classify/template"
)

// scoring reads the keys that say how to score.
func (p *Plan) scoring() (classify.Options, error) {
	o := classify.Options{
		Band: p.Band, PerTake: p.PerTake, Curve: p.Curve, Reject: p.Reject,
		TakesPerLabel: p.TakesPerLabel, TestShare: p.TestShare, Seed: p.Seed, Workers: p.Workers,
	}
	if p.given["repeats"] {
		o.Repeats = p.Repeats
	}
	var err error
	if o.Protocol, err = classify.ParseProtocol(p.Protocol); err != nil {
		return o, p.fault("protocol", "%v", err)
	}
	if o.Normalise, err = template.ParseNormalise(p.Normalise); err != nil {
		return o, p.fault("normalise", "%v", err)
	}
	if err := p.learners(&o); err != nil {
		return o, err
	}
	if o.Weights, err = p.weights(); err != nil {
		return o, err
	}
	if !(p.Band > 0 && p.Band <= 1) {
		return o, p.fault("band", "%g is not a fraction of the length; legal bands are above 0 and up to 1, the full window", p.Band)
	}
	if !(p.TestShare >= 0 && p.TestShare < 1) {
		return o, p.fault("test_share", "%g is not a share; legal shares lie from 0, which tests one at a time, to below 1", p.TestShare)
	}
	return o, p.counts()
}

// learners reads the keys that say what learners to score.
func (p *Plan) learners(o *classify.Options) error {
	if !slices.Contains([]string{"template", "convolution", "both"}, p.Learner) {
		return p.fault("learner", "unknown learner %q; legal names are template, convolution, both", p.Learner)
	}
	for _, name := range p.Distance {
		d, err := template.ParseDistance(name)
		if err != nil {
			return p.fault("distance", "%v", err)
		}
		o.Distances = append(o.Distances, d)
	}
	if len(o.Distances) == 0 {
		return p.fault("distance", "no distance is named")
	}
	convolve, err := p.convolution()
	if err != nil {
		return err
	}
	if p.Learner != "template" {
		o.Learners = []classify.Learner{convolve}
	}
	if p.Learner == "convolution" {
		o.Distances = nil
	}
	return nil
}

// weights reads the plan's weights of channel groups, each GROUP=WEIGHT.
func (p *Plan) weights() (map[string]float64, error) {
	var out map[string]float64
	for _, rule := range p.Weight {
		name, text, ok := strings.Cut(rule, "=")
		w, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
		if !ok || err != nil || (template.Metric{Distance: template.EuclideanDependent, Weights: map[string]float64{name: w}}).Validate() != nil {
			return nil, p.fault("weight", "%q is not GROUP=WEIGHT with a weight of 0 or more, such as left_wrist.accel=2", rule)
		}
		if out == nil {
			out = make(map[string]float64)
		}
		out[strings.TrimSpace(name)] = w
	}
	return out, nil
}

// convolution reads the keys of the convolution learner.
func (p *Plan) convolution() (classify.Learner, error) {
	o := convolution.Options{Kernels: p.Kernels}
	if p.RawKernels {
		o.Normalise = convolution.AsIs
	}
	if p.Kernels < 1 {
		return nil, p.fault("kernels", "%d is impossible; it must be 1 or more", p.Kernels)
	}
	ridge := convolution.Ridge{Choose: p.Ridge == "choose"}
	if !ridge.Choose {
		strength, err := strconv.ParseFloat(p.Ridge, 64)
		if err != nil || strength <= 0 || (convolution.Ridge{Strength: strength}).Validate() != nil {
			return nil, p.fault("ridge", "%q is neither a strength above 0 nor choose", p.Ridge)
		}
		ridge.Strength = strength
	}
	return classify.Convolution(o, ridge, p.Seed), nil
}

// counts checks the keys that are numbers of things.
func (p *Plan) counts() error {
	for _, k := range []struct {
		key         string
		value, from int
	}{
		{"per_take", p.PerTake, 0}, {"repeats", p.Repeats, 1}, {"workers", p.Workers, 1},
	} {
		if k.value < k.from {
			return p.fault(k.key, "%d is impossible; it must be %d or more", k.value, k.from)
		}
	}
	for i, k := range p.TakesPerLabel {
		if k < 0 || slices.Contains(p.TakesPerLabel[:i], k) {
			return p.fault("takes_per_label", "%d is impossible, or named twice; it must be 0 or more", k)
		}
	}
	for _, m := range p.Curve {
		if m < 0 || m > p.PerTake {
			return p.fault("curve", "%d is impossible; it must lie between 0 and per_take, %d", m, p.PerTake)
		}
	}
	return nil
}
