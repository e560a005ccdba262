package job

import (
	"runtime"

	"github.com/spf13/pflag"

	"strandwise/export"
)

// NewPlan returns a plan with every default in place.
func NewPlan() *Plan {
	return &Plan{
		Interpolate: "linear",
		LongestGap:  3,
		Method:      []string{"recipe"}, Reach: 1, Kind: "measured", Timing: "smooth", Spread: 0.03, TimeShare: 1, Mix: 0.6, PathShare: 0.25, Coupling: measured,
		PerTake:       32,
		Seed:          1,
		Learner:       "template",
		Distance:      []string{"euclidean-dependent", "dtw-dependent"},
		Normalise:     "none",
		Band:          0.1,
		Kernels:       300,
		Ridge:         "100",
		Repeats:       10,
		Reject:        true,
		Tables:        []string{"takes"},
		WindowLength:  "64",
		WindowPadding: "hold",
		Compression:   "snappy",
		RowGroupBytes: export.DefaultRowGroupBytes,
		FileBytes:     export.DefaultFileBytes,
		Workers:       runtime.GOMAXPROCS(0),
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
	f.StringVar(&p.Signals, "signals", p.Signals, "what of a C3D file is read: points or analog")
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
	f.StringSliceVar(&p.Method, "method", p.Method, "how takes are made: recipe, or a published method by name; several with weights, such as recipe=3,path=1")
	f.IntVar(&p.PerTake, "per-take", p.PerTake, "synthetic takes for each recorded one")
	f.Uint64Var(&p.Seed, "seed", p.Seed, "seed of every random draw")
	f.Float64Var(&p.Reach, "reach", p.Reach, "factor on how far takes vary, 1 as measured")
	f.StringVar(&p.Kind, "kind", p.Kind, "kind of motion: gesture, ongoing (a stretch of a motion that repeats) or measured")
	f.StringVar(&p.Timing, "timing", p.Timing, "how timing is drawn: smooth (the rate of playing) or knots (intervals between a few)")
	f.IntVar(&p.Knots, "knots", p.Knots, "points at which a path is resampled; few vary much (0: 6, or by the published regression for path)")
	f.Float64Var(&p.Spread, "spread", p.Spread, "variance of the intervals between knots, below 1/3")
	f.Float64Var(&p.TimeShare, "time-share", p.TimeShare, "weight of time against arc length along a path, 0 to 1")
	f.Float64Var(&p.Mix, "mix", p.Mix, "largest share of another take of the label, 0 to 1")
	f.Float64Var(&p.PathShare, "path-share", p.PathShare, "share of draws by published path resampling where all channels are positions, 0 to 1")
	f.StringVar(&p.Coupling, "coupling", p.Coupling, "how far limbs share their timing: 0 to 1, or measured")
	f.BoolVar(&p.FreeFeet, "free-feet", p.FreeFeet, "let feet move that stand still in the source")
	f.StringArrayVar(&p.Limit, "limit", p.Limit, "values between which a channel stays, CHANNEL=LOW..HIGH (repeatable)")
	f.StringSliceVar(&p.Gate, "gate", p.Gate, "what takes must pass: GATE=THRESHOLD or GATE=off; all=off for none (finite, range, jerk, bandwidth, bones, stray, copy)")
	f.IntVar(&p.Keep, "keep", p.Keep, "of the synthetic takes made of each recorded one, how many are kept, the best choice first; 0 for all")
	f.StringSliceVar(&p.Spare, "spare", p.Spare, "labels that are left as recorded")
	f.StringVar(&p.Marks, "marks", p.Marks, "set whose marks are honoured: takes that a person dropped in look are replaced by the next in rank")
	f.StringVar(&p.Variation, "variation", p.Variation, "file of measured variation, from measure --json or a set, to use instead of measuring")
	p.sizeFlags(f)
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
	f.StringVar(&p.Out, "out", p.Out, "folder to write the set into, which must not exist, be empty or hold an unfinished set of the same plan; - is --stream")
	f.StringSliceVar(&p.Tables, "tables", p.Tables, "tables of the set: takes (one row a take), frames (one row a frame), windows (one row a stretch of so many frames)")
	f.StringVar(&p.WindowLength, "window-length", p.WindowLength, "length of a window in frames, such as 64, or in seconds, such as 0.5s")
	f.StringVar(&p.WindowHop, "window-hop", p.WindowHop, "from the start of one window to that of the next, in frames or seconds (default half the length)")
	f.StringVar(&p.WindowPadding, "window-padding", p.WindowPadding, "what fills a window at the end of a take: hold (its last frame), zero, or none (no such window)")
	f.BoolVar(&p.WindowInt16, "window-int16", p.WindowInt16, "write windows as 16-bit numbers, with one scale for each channel group")
	f.StringVar(&p.Compression, "compression", p.Compression, "of the Parquet files: snappy, zstd or none")
	f.Int64Var(&p.RowGroupBytes, "row-group-bytes", p.RowGroupBytes, "bytes of values after which a row group ends")
	f.Int64Var(&p.FileBytes, "file-bytes", p.FileBytes, "bytes that a Parquet file shall about have, and at most twice")
	f.IntVar(&p.Buckets, "buckets", p.Buckets, "parts the set is written in, and at most so many shards; 0 for as many as give files of --file-bytes")
	f.BoolVar(&p.HideSubjects, "hide-subjects", p.HideSubjects, "replace names of people everywhere in the set by hashes under --subject-salt")
	f.StringVar(&p.SubjectSalt, "subject-salt", p.SubjectSalt, "file of 16 random bytes or more to hide names under; keep it secret, and for the next set")
	f.StringVar(&p.Title, "title", p.Title, "name of the set, for its card and croissant.json")
	f.StringVar(&p.Creator, "creator", p.Creator, "the person or body that answers for the set")
	f.StringVar(&p.Licence, "licence", p.Licence, "URL of the licence the set is given under")
	f.StringVar(&p.URL, "url", p.URL, "URL of the page the set is found at")
	f.StringVar(&p.Published, "published", p.Published, "day the set is published, such as 2026-12-31")
}
