package ingest

import (
	"cmp"
	"fmt"
	"maps"
	"slices"

	"strandwise/channels"
	"strandwise/ingest/clock"
	"strandwise/ingest/signal"
)

// Kinds of findings.
const (
	Refused    = "refused"         // a fault for which grow refuses the recordings
	Duplicated = "duplicated time" // frames of equal time
	Reversed   = "reversed time"
	Gaps       = "gap"
	Jitter     = "jitter"
	Drift      = "two clocks"
	Missing    = "missing"
	Clipped    = "clipping"
	Stuck      = "stuck"
	Spikes     = "spikes"
	Unit       = "unit"
	NoGravity  = "no gravity"
	Twice      = "twice"   // the same recording under two names
	Balance    = "balance" // labels or people are unevenly represented
)

// Report is what [Recordings.Check] finds. It is ready to be written as JSON.
type Report struct {
	Files    []FileReport `json:"files"`
	Labels   []LabelCount `json:"labels"` // by label, then subject
	Findings []Finding    `json:"findings"`
	Faults   int          `json:"faults"` // findings for which grow refuses the recordings
	Notices  []string     `json:"notices"`
	Repairs  Repairs      `json:"repairs"` // of what was allowed to be repaired
}

// FileReport sums up the takes of one file.
type FileReport struct {
	File     string  `json:"file"`
	Takes    int     `json:"takes"`
	Frames   int     `json:"frames"`
	Seconds  float64 `json:"seconds"`
	Rate     float64 `json:"rate_hz"`     // nominal, of its first take
	Jitter   float64 `json:"jitter_s"`    // median of |step − nominal|, of the worst take
	Jitter99 float64 `json:"jitter_99_s"` // its 99th percentile, of the worst take
	Gaps     int     `json:"gaps"`        // places where frames are missing
	Faults   int     `json:"faults"`      // for which grow refuses it
}

// take counts one take in.
func (f *FileReport) take(r clock.Report) {
	if f.Takes == 0 && r.Step > 0 {
		f.Rate = 1 / r.Step
	}
	f.Takes++
	f.Frames += r.Frames
	f.Seconds += r.Last - r.First
	f.Jitter, f.Jitter99 = max(f.Jitter, r.Jitter), max(f.Jitter99, r.Jitter99)
	f.Gaps += len(r.Gaps)
}

// LabelCount counts the takes of one label by one subject.
type LabelCount struct {
	Label   string  `json:"label"`
	Subject string  `json:"subject"`
	Takes   int     `json:"takes"`
	Seconds float64 `json:"seconds"`
}

// Finding is one thing about the recordings that a user should know. What is
// alike in many takes of one file is one finding; it names the first of them.
type Finding struct {
	Kind    string `json:"kind"`
	File    string `json:"file,omitempty"`
	Line    int    `json:"line,omitempty"`
	Take    string `json:"take,omitempty"`
	Channel string `json:"channel,omitempty"`
	Takes   int    `json:"takes,omitempty"` // concerned
	Count   int    `json:"count,omitempty"` // frames or values concerned
	Text    string `json:"text"`
}

// report sums up a pass.
func (c *checker) report(r *Recordings) *Report {
	out := &Report{Files: c.files, Faults: c.faults, Notices: r.Notices(), Repairs: r.Repairs(), Labels: c.labels(), Findings: []Finding{}}
	for _, key := range c.order {
		out.Findings = append(out.Findings, *c.findings[key])
	}
	if r.frame != nil {
		out.Findings = append(out.Findings, c.clipped(r.frame)...)
		out.Findings = append(out.Findings, c.accelerometers()...)
	}
	out.Findings = append(out.Findings, balance(out.Labels)...)
	slices.SortStableFunc(out.Findings, func(a, b Finding) int { return cmp.Compare(b2i(a.Kind != Refused), b2i(b.Kind != Refused)) })
	return out
}

func b2i(b bool) int {
	if b {
		return 1
	}
	return 0
}

func (c *checker) labels() []LabelCount {
	out := []LabelCount{}
	for k, n := range c.cells {
		out = append(out, LabelCount{k.label, k.subject, n.takes, n.seconds})
	}
	slices.SortFunc(out, func(a, b LabelCount) int {
		return cmp.Or(cmp.Compare(a.Label, b.Label), cmp.Compare(a.Subject, b.Subject))
	})
	return out
}

// clipped reports clipping over all takes.
func (c *checker) clipped(f *frame) []Finding {
	var out []Finding
	if c.clipping == nil {
		return nil
	}
	for _, x := range c.clipping.Findings() {
		ch, unit := f.layout.Channels[x.Channel], f.units[x.Channel]
		level := fmt.Sprintf("%.6g %s", x.Level, ch.Unit)
		if unit.Symbol != "" && unit.Factor != 1 {
			level += fmt.Sprintf(" (%.4g %s)", x.Level/unit.Factor, unit.Symbol)
		}
		out = append(out, Finding{
			Kind: Clipped, Take: c.ids[x.Take], Channel: ch.Name, Takes: x.Takes, Count: x.Count,
			Text: fmt.Sprintf("frames stand at %s, up to %d in a row: the sensor's range ends there", level, x.Longest),
		})
	}
	return out
}

// accelerometers reports what accelerometers at rest say of their units.
func (c *checker) accelerometers() []Finding {
	var out []Finding
	for _, name := range slices.Sorted(maps.Keys(c.gravity)) {
		switch v, takes := c.gravity[name].Common(); v.Gravity {
		case signal.OtherUnit:
			out = append(out, Finding{Kind: Unit, Channel: name, Takes: takes, Text: fmt.Sprintf("at rest it shows the acceleration of gravity as if recorded in %s; state the unit with --unit", v.Unit)})
		case signal.Absent:
			out = append(out, Finding{Kind: NoGravity, Channel: name, Takes: takes, Text: "at rest it shows no gravity: the logger took it out"})
		}
	}
	return out
}

// Labels count as unevenly recorded when one has unevenLabels times the takes
// of another, and a person as dominating a label with more than dominates of
// its takes where three people or more are recorded (common practice).
const (
	unevenLabels = 3
	dominates    = 0.6
)

// balance reports labels and people that are unevenly represented.
func balance(cells []LabelCount) []Finding {
	var out []Finding
	labels, people := map[string]int{}, map[string]bool{}
	for _, c := range cells {
		labels[c.Label] += c.Takes
		people[c.Subject] = true
	}
	names := slices.Sorted(maps.Keys(labels))
	if len(names) > 1 {
		byTakes := func(a, b string) int { return cmp.Compare(labels[a], labels[b]) }
		few, many := slices.MinFunc(names, byTakes), slices.MaxFunc(names, byTakes)
		if labels[many] >= unevenLabels*labels[few] {
			out = append(out, Finding{Kind: Balance, Text: fmt.Sprintf("label %q has %d takes, label %q only %d", many, labels[many], few, labels[few])})
		}
	}
	for _, c := range cells {
		if len(people) >= 3 && labels[c.Label] >= 3 && float64(c.Takes) > dominates*float64(labels[c.Label]) {
			out = append(out, Finding{Kind: Balance, Takes: c.Takes, Text: fmt.Sprintf("subject %q made %d of the %d takes of label %q", c.Subject, c.Takes, labels[c.Label], c.Label)})
		}
	}
	return out
}

// groups lists the channels of each group.
func (f *frame) groups() [][]int {
	out := make([][]int, len(f.layout.Groups))
	for i, g := range f.layout.Groups {
		out[i] = g.Channels
	}
	return out
}

// accelerometer returns the axes of a group that is one.
func (f *frame) accelerometer(g channels.Group) (axes [3]int, ok bool) {
	if len(g.Channels) != 3 {
		return axes, false
	}
	for i, c := range g.Channels {
		if f.layout.Channels[c].Quantity != channels.Acceleration {
			return axes, false
		}
		axes[i] = c
	}
	return axes, true
}

// decimals returns how large the last decimal is that a copy of a recording
// keeps, for each channel: the fourth as recorded.
func (f *frame) decimals() []float64 {
	out := make([]float64, len(f.units))
	for i, u := range f.units {
		out[i] = 1e-4 * u.Factor
	}
	return out
}
