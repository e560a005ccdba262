package job

import (
	"errors"
	"strconv"
	"strings"

	"github.com/spf13/pflag"

	"strandwise/augment"
	"strandwise/augment/variation"
)

// variation reads the keys that say how takes are made.
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
	v.Mix, v.PathShare, v.FreeFeet = p.Mix, p.PathShare, p.FreeFeet
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
		variation.Shape: &p.Shape, variation.Straighten: &p.Straighten, variation.Noise: &p.Noise,
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
		variation.Straighten:   "strength of displacement normalisation, 0 to 1",
		variation.Noise:        "sensor noise added, as a multiple of that measured at rest",
	} {
		f.Float64Var(p.size(part), strings.ReplaceAll(sizeKey(part), "_", "-"), 0, what+" (default: as measured)")
	}
}
