// Package job is what the commands share: the plan, and the order of the
// stages. No mathematics lives here.
package job

import (
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"strings"

	"github.com/BurntSushi/toml"
	"github.com/spf13/pflag"

	"strandwise/augment/variation"
)

// Plan says what to do. Every field is a key of the plan file and, with dashes
// for underscores, a flag of the same meaning; recordings are the arguments.
// Start from [NewPlan].
type Plan struct {
	// What to read.
	Recordings  []string `toml:"recordings"`
	Pattern     string   `toml:"pattern"`
	Label       string   `toml:"label"`
	Columns     []string `toml:"columns"`
	Rate        float64  `toml:"rate"`
	TimeUnit    string   `toml:"time_unit"`
	Unit        []string `toml:"unit"`
	Group       []string `toml:"group"`
	LeaveOut    []string `toml:"leave_out"`
	LengthUnit  string   `toml:"length_unit"`
	Signals     string   `toml:"signals"`
	Cut         string   `toml:"cut"`
	Annotations string   `toml:"annotations"`
	HoldOut     string   `toml:"hold_out"`

	// What to repair.
	Repair      []string `toml:"repair"`
	ToRate      float64  `toml:"to_rate"`
	Interpolate string   `toml:"interpolate"`
	LongestGap  int      `toml:"longest_gap"`

	// How to make takes.
	Method       []string `toml:"method"`
	PerTake      int      `toml:"per_take"`
	Seed         uint64   `toml:"seed"`
	Reach        float64  `toml:"reach"`
	Kind         string   `toml:"kind"`
	Timing       string   `toml:"timing"`
	TimingSpread float64  `toml:"timing_spread"`
	TimingLength float64  `toml:"timing_length"`
	Knots        int      `toml:"knots"`
	Spread       float64  `toml:"spread"`
	TimeShare    float64  `toml:"time_share"`
	Trim         float64  `toml:"trim"`
	Duration     float64  `toml:"duration"`
	Orientation  float64  `toml:"orientation"`
	Amplitude    float64  `toml:"amplitude"`
	Gain         float64  `toml:"gain"`
	ChannelGain  float64  `toml:"channel_gain"`
	Offset       float64  `toml:"offset"`
	Shape        float64  `toml:"shape"`
	ShapeLength  float64  `toml:"shape_length"`
	Straighten   float64  `toml:"straighten"`
	Noise        float64  `toml:"noise"`
	Mix          float64  `toml:"mix"`
	PathShare    float64  `toml:"path_share"`
	Coupling     string   `toml:"coupling"`
	FreeFeet     bool     `toml:"free_feet"`
	Limit        []string `toml:"limit"`
	Gate         []string `toml:"gate"`
	Keep         int      `toml:"keep"`
	Spare        []string `toml:"spare"`
	Variation    string   `toml:"variation"`
	Marks        string   `toml:"marks"`

	// How to score.
	Protocol      string   `toml:"protocol"`
	Learner       string   `toml:"learner"`
	Distance      []string `toml:"distance"`
	Normalise     string   `toml:"normalise"`
	Band          float64  `toml:"band"`
	Weight        []string `toml:"weight"`
	Kernels       int      `toml:"kernels"`
	Ridge         string   `toml:"ridge"`
	RawKernels    bool     `toml:"raw_kernels"`
	Repeats       int      `toml:"repeats"`
	TakesPerLabel []int    `toml:"takes_per_label"`
	TestShare     float64  `toml:"test_share"`
	Curve         []int    `toml:"curve"`
	Reject        bool     `toml:"reject"`
	NoGesture     []string `toml:"no_gesture"`
	Compare       bool     `toml:"compare"`

	// What to write, and how.
	Out     string   `toml:"out"`
	Tables  []string `toml:"tables"`
	Workers int      `toml:"workers"`

	WindowLength  string `toml:"window_length"`
	WindowHop     string `toml:"window_hop"`
	WindowPadding string `toml:"window_padding"`
	WindowInt16   bool   `toml:"window_int16"`
	Compression   string `toml:"compression"`
	RowGroupBytes int64  `toml:"row_group_bytes"`
	FileBytes     int64  `toml:"file_bytes"`
	Buckets       int    `toml:"buckets"`
	HideSubjects  bool   `toml:"hide_subjects"`
	SubjectSalt   string `toml:"subject_salt"`

	// What its makers say of the set.
	Title     string `toml:"title"`
	Creator   string `toml:"creator"`
	Licence   string `toml:"licence"`
	URL       string `toml:"url"`
	Published string `toml:"published"`

	shard *Shard          // to write, nil for the whole set
	file  string          // the plan file, empty without one
	text  string          // its content
	given map[string]bool // keys set by the file or by a flag
	flags map[string]bool // keys set by a flag
}

// UsageError is a mistake in the command line or the plan, not in the data.
type UsageError struct {
	Where   string // "--per-take", "plan.toml line 7: per_take"; empty when it is no single place
	Problem string
}

// Error gives the place and the problem in one line.
func (e *UsageError) Error() string {
	if e.Where == "" {
		return e.Problem
	}
	return e.Where + ": " + e.Problem
}

// keys lists the plan's keys in the order of its fields.
func keys() []string {
	var out []string
	for f := range reflect.TypeFor[Plan]().Fields() {
		if tag, ok := f.Tag.Lookup("toml"); ok {
			out = append(out, tag)
		}
	}
	return out
}

// Load reads the plan file over p, then sets again what was given as a flag of
// the command, so that flags win. Relative paths in the file start from its
// own folder. Without a file only the flags count. args are the recordings
// named on the command line; they replace those of the file.
func (p *Plan) Load(file string, flags *pflag.FlagSet, args []string) error {
	p.given, p.flags = make(map[string]bool), make(map[string]bool)
	again := p.remember(flags)
	if file != "" {
		if err := p.read(file); err != nil {
			return err
		}
		for _, set := range again {
			set()
		}
	}
	if len(args) > 0 {
		p.Recordings = args
		p.given["recordings"], p.flags["recordings"] = true, true
	}
	return nil
}

// remember notes which keys were given as flags, and returns how to set each
// of them again.
func (p *Plan) remember(flags *pflag.FlagSet) []func() {
	var again []func()
	fields := reflect.ValueOf(p).Elem()
	index := make(map[string]int)
	for i := range fields.NumField() {
		index[fields.Type().Field(i).Tag.Get("toml")] = i
	}
	flags.Visit(func(f *pflag.Flag) {
		key := strings.ReplaceAll(f.Name, "-", "_")
		i, ok := index[key]
		if !ok {
			return
		}
		p.given[key], p.flags[key] = true, true
		value := reflect.ValueOf(fields.Field(i).Interface()) // a copy of what the flag said
		if value.Kind() == reflect.Slice {
			value = reflect.AppendSlice(reflect.Zero(value.Type()), value) // the file must not write into it
		}
		again = append(again, func() { fields.Field(i).Set(value) })
	})
	return again
}

func (p *Plan) read(file string) error {
	text, err := os.ReadFile(file)
	if err != nil {
		return &UsageError{Problem: fmt.Sprintf("cannot read the plan: %v", err)}
	}
	p.file, p.text = file, string(text)
	meta, err := toml.Decode(p.text, p)
	if err != nil {
		return p.syntaxError(err)
	}
	if unknown := meta.Undecoded(); len(unknown) > 0 {
		key := unknown[0].String()
		return &UsageError{
			Where:   fmt.Sprintf("%s line %d", file, p.line(key)),
			Problem: fmt.Sprintf("unknown key %q; legal keys are %s", key, strings.Join(keys(), ", ")),
		}
	}
	for _, key := range meta.Keys() {
		p.given[key.String()] = true
	}
	folder := filepath.Dir(file)
	for i, r := range p.Recordings {
		p.Recordings[i] = from(folder, r)
	}
	if meta.IsDefined("annotations") {
		p.Annotations = from(folder, p.Annotations)
	}
	if meta.IsDefined("marks") {
		p.Marks = from(folder, p.Marks)
	}
	if meta.IsDefined("variation") {
		p.Variation = from(folder, p.Variation)
	}
	if meta.IsDefined("subject_salt") {
		p.SubjectSalt = from(folder, p.SubjectSalt)
	}
	if meta.IsDefined("out") {
		p.Out = from(folder, p.Out)
	}
	return nil
}

func (p *Plan) syntaxError(err error) error {
	if parse, ok := err.(toml.ParseError); ok {
		where := fmt.Sprintf("%s line %d", p.file, parse.Position.Line)
		if parse.LastKey != "" {
			where += ": " + parse.LastKey
		}
		return &UsageError{Where: where, Problem: parse.Message}
	}
	return &UsageError{Where: p.file, Problem: err.Error()}
}

// from returns a path of the plan file as seen from the working folder.
func from(folder, path string) string {
	if path == "" || path == "-" || filepath.IsAbs(path) {
		return path
	}
	return filepath.Join(folder, path)
}

// line returns the line of the plan file on which a key is set, from 1.
func (p *Plan) line(key string) int { return 1 + max(p.find(key), 0) }

// find returns the index of the line on which a key is set, or -1.
func (p *Plan) find(key string) int {
	last := key[strings.LastIndex(key, ".")+1:]
	at := regexp.MustCompile(`^\s*\[*\s*"?` + regexp.QuoteMeta(last) + `"?\s*[=.\]]`)
	return slices.IndexFunc(strings.Split(p.text, "\n"), at.MatchString)
}

// fault is a usage error about one key, placed where the user set it.
func (p *Plan) fault(key string, format string, args ...any) error {
	where := "--" + strings.ReplaceAll(key, "_", "-")
	if key == "recordings" {
		where = ""
	}
	if p.file != "" && p.given[key] && !p.flags[key] {
		where = fmt.Sprintf("%s line %d: %s", p.file, p.line(key), key)
	}
	return &UsageError{Where: where, Problem: fmt.Sprintf(format, args...)}
}

// settings returns the plan by key as it was carried out, without what changes
// no byte of a set. Sizes that were left to measuring are absent.
func (p *Plan) settings() map[string]any {
	out := make(map[string]any)
	fields := reflect.ValueOf(*p)
	for i := range fields.NumField() {
		if key, ok := fields.Type().Field(i).Tag.Lookup("toml"); ok {
			out[key] = fields.Field(i).Interface()
		}
	}
	for _, part := range variation.Parts() {
		if key := sizeKey(part); !p.given[key] {
			delete(out, key)
		}
	}
	delete(out, "out")
	delete(out, "workers")
	delete(out, "subject_salt") // a secret
	return out
}
