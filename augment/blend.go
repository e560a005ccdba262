package augment

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// Method names a way of making takes.
type Method string

// The methods. Recipe varies timing, size, orientation and shape together;
// Path is the published stochastic path resampling, which knows no clock. The
// others are published methods too: see packages method and lognormal.
const (
	Recipe        Method = "recipe"
	Path          Method = "path"
	TimeWarp      Method = "time-warp"
	MagnitudeWarp Method = "magnitude-warp"
	Jitter        Method = "jitter"
	Scaling       Method = "scaling"
	Rotation      Method = "rotation"
	Slice         Method = "window-slice"
	NoiseField    Method = "noise-field"
	Parts         Method = "part-wise"
	Barycentre    Method = "barycentre"
	Lognormal     Method = "sigma-lognormal"
	Mirror        Method = "mirror"
)

// Methods lists every method, the default first.
func Methods() []Method {
	return []Method{Recipe, Path, TimeWarp, MagnitudeWarp, Jitter, Scaling, Rotation, Slice, NoiseField, Parts, Barycentre, Lognormal, Mirror}
}

// ParseMethod reads a method's name; the error lists the legal ones.
func ParseMethod(name string) (Method, error) { return parse("method", name, Methods()) }

// Share is a method with its weight in a blend.
type Share struct {
	Method Method
	Weight float64
}

// ParseBlend reads methods, each NAME or NAME=WEIGHT; the weight is 1 where
// none is given.
func ParseBlend(list []string) ([]Share, error) {
	var out []Share
	for _, text := range list {
		name, weight, weighed := strings.Cut(text, "=")
		m, err := ParseMethod(strings.TrimSpace(name))
		if err != nil {
			return nil, err
		}
		s := Share{m, 1}
		if weighed {
			if s.Weight, err = strconv.ParseFloat(strings.TrimSpace(weight), 64); err != nil {
				return nil, fmt.Errorf("%q is not METHOD=WEIGHT, such as recipe=3", text)
			}
		}
		out = append(out, s)
	}
	return out, nil
}

// pick returns which of the shares a draw falls to. Draws in their order come
// from each method in its proportion, as evenly as whole numbers allow: the
// draw falls to the share that is furthest behind, of equal ones the first.
type pick struct {
	weights []float64
	made    []int
	order   []int // share of each draw so far
}

func newPick(weights []float64) *pick {
	return &pick{weights: weights, made: make([]int, len(weights))}
}

// of returns the share of a draw, from 0.
func (p *pick) of(draw int) int {
	for len(p.order) <= draw {
		behind := make([]float64, len(p.weights))
		for i, w := range p.weights {
			behind[i] = (float64(p.made[i]) + 0.5) / w
		}
		i := slices.Index(behind, slices.Min(behind))
		p.made[i]++
		p.order = append(p.order, i)
	}
	return p.order[draw]
}
