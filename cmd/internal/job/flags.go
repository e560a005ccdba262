package job

import (
	"runtime"

	"github.com/spf13/pflag"
)

// NewPlan returns a plan with every default in place.
func NewPlan() *Plan {
	return &Plan{
		Interpolate: "linear",
		LongestGap:  3,
		Method:      "timed-path",
		PerTake:     32,
		Seed:        1,
		Learner:     "template",
		Distance:    []string{"euclidean-dependent", "dtw-dependent"},
		Normalise:   "none",
		Band:        0.1,
		Kernels:     300,
		Ridge:       "100",
		Repeats:     10,
		Reject:      true,
		Tables:      []string{"takes"},
		Workers:     runtime.GOMAXPROCS(0),
	}
}

// ReadFlags adds the flags that say what to read.
func (p *Plan) ReadFlags(f *pflag.FlagSet) {
	f.StringVar(&p.Pattern, "pattern", p.Pattern, "identity in the path of one-take files, such as '{subject}/{label}_{session}_{take}.csv'")
	f.StringVar(&p.Label, "label", p.Label, "label of takes that state none")
	f.StringSliceVar(&p.Columns, "columns", p.Columns, "column names of recordings that have no header line")
	f.Float64Var(&p.Rate, "rate", p.Rate, "frames per second of recordings that have no time column")
	f.StringVar(&p.TimeUnit, "time-unit", p.TimeUnit, "unit of a time column that states none: s, ms, us or ns")
	f.StringArrayVar(&p.Unit, "unit", p.Unit, "unit of channels, CHANNELS=UNIT, such as 'c0-c2=g' (repeatable)")
	f.StringArrayVar(&p.Group, "group", p.Group, "channel group, NAME=CHANNELS or NAME@LIMB=CHANNELS, such as 'left=c0-c2,c6-c8' (repeatable)")
	f.StringSliceVar(&p.LeaveOut, "leave-out", p.LeaveOut, "columns that are no channels, by name or glob")
	f.StringVar(&p.LengthUnit, "length-unit", p.LengthUnit, "unit of length of files that carry none (BVH): m, cm, mm or in")
	f.StringVar(&p.Stream, "stream", p.Stream, "what of a C3D file is read: points or analog")
	f.StringSliceVar(&p.Repair, "repair", p.Repair, "what may be repaired: clock (a uniform clock, short gaps filled), order, duplicates, split, or all")
	f.Float64Var(&p.ToRate, "to-rate", p.ToRate, "bring recordings to this many frames per second; implies --repair clock")
	f.StringVar(&p.Interpolate, "interpolate", p.Interpolate, "how repairs fill: linear or cubic")
	f.IntVar(&p.LongestGap, "longest-gap", p.LongestGap, "missing frames in a row that may be filled or bridged")
	f.StringVar(&p.Annotations, "annotations", p.Annotations, "file of start, end, label and subject that cuts one long recording into takes")
	f.StringVar(&p.Cut, "cut", p.Cut, "how long recordings are cut: annotations (the default, where there are any), rest or none")
	f.StringVar(&p.HoldOut, "hold-out", p.HoldOut, "people kept for the test: subject=NAME,… or a fraction of them")
}

// MakeFlags adds the flags that say how to make takes.
func (p *Plan) MakeFlags(f *pflag.FlagSet) {
	f.StringVar(&p.Method, "method", p.Method, "how takes are made: timed-path, or path (the published method)")
	f.IntVar(&p.PerTake, "per-take", p.PerTake, "synthetic takes for each recorded one")
	f.Uint64Var(&p.Seed, "seed", p.Seed, "seed of every random draw")
	f.IntVar(&p.Knots, "knots", p.Knots, "points at which a path is resampled; few vary much (default by method)")
	f.Float64Var(&p.Spread, "spread", p.Spread, "variance of the intervals between knots, below 1/3 (default by method)")
	f.Float64Var(&p.TimeShare, "time-share", p.TimeShare, "weight of time against arc length along a path, 0 to 1 (default by method)")
	f.Float64Var(&p.Straighten, "straighten", p.Straighten, "strength of displacement normalisation, 0 to 1 (default by method)")
	f.Float64Var(&p.Trim, "trim", p.Trim, "standard deviation of the shift of start and end, as a fraction of the take (default by method)")
	f.Float64Var(&p.Coupling, "coupling", p.Coupling, "how far limbs share their timing, 0 to 1 (default by method)")
}

// ScoreFlags adds the flags that say how to score.
func (p *Plan) ScoreFlags(f *pflag.FlagSet) {
	f.StringVar(&p.Protocol, "protocol", p.Protocol, "given, subject, session or pooled (default: given with a test split, else subject with three people or more, else pooled)")
	f.StringVar(&p.Learner, "learner", p.Learner, "template (nearest, by each distance), convolution (random kernels and ridge regression) or both")
	f.StringSliceVar(&p.Distance, "distance", p.Distance, "distances to nearest templates: euclidean- or dtw-, each -dependent or -independent, and direction-cosine")
	f.StringVar(&p.Normalise, "normalise", p.Normalise, "for templates: none, z (each take and channel to mean 0 and deviation 1) or group (each group by one scale)")
	f.Float64Var(&p.Band, "band", p.Band, "half width of the Sakoe–Chiba band as a fraction of the length, 1 for none")
	f.StringArrayVar(&p.Weight, "weight", p.Weight, "weight of a channel group in distances, GROUP=WEIGHT, 1 where none is given (repeatable)")
	f.IntVar(&p.Kernels, "kernels", p.Kernels, "random kernels of the convolution learner")
	f.StringVar(&p.Ridge, "ridge", p.Ridge, "ridge strength of the convolution learner, or choose: by leaving recorded takes out with what was made from them")
	f.BoolVar(&p.RawKernels, "raw-kernels", p.RawKernels, "kernels read takes as they are, not brought to mean 0 and deviation 1")
	f.IntVar(&p.Repeats, "repeats", p.Repeats, "random splits, where something is drawn at random")
	f.IntSliceVar(&p.TakesPerLabel, "takes-per-label", p.TakesPerLabel, "recorded training takes of each label, such as 1,2,3,5; 0 for half of them (default: half in protocol pooled, else all)")
	f.Float64Var(&p.TestShare, "test-share", p.TestShare, "of protocols subject and session: the share tested in each split, 0 for one at a time")
	f.IntSliceVar(&p.Curve, "curve", p.Curve, "smaller numbers of synthetic takes per recorded one to report too, such as 0,4,8,16")
	f.BoolVar(&p.Reject, "reject", p.Reject, "find the distance beyond which a movement is no gesture")
	f.StringSliceVar(&p.NoGesture, "no-gesture", p.NoGesture, "labels of takes that are no gesture: in the score they only set the distance beyond which a movement is refused")
	f.BoolVar(&p.Compare, "compare", p.Compare, "score every method of making takes, each at its defaults, beside the one chosen")
}

// WorkFlags adds the flag for the number of workers.
func (p *Plan) WorkFlags(f *pflag.FlagSet) {
	f.IntVar(&p.Workers, "workers", p.Workers, "takes worked on at a time; does not change a byte of what is written")
}

// WriteFlags adds the flags that say what to write.
func (p *Plan) WriteFlags(f *pflag.FlagSet) {
	f.StringVar(&p.Out, "out", p.Out, "folder to write the set into; must not exist or be empty")
	f.StringSliceVar(&p.Tables, "tables", p.Tables, "tables of the set: takes (one row a take), frames (one row a frame)")
}
