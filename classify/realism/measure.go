package realism

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"strandwise/channels"
	"strandwise/classify"
)

// Measure makes takes from recorded ones and says how real they are. Scales
// and maker must know nothing that should not be known: they are best measured
// on the same takes. It costs one description of every take, recorded and
// synthetic, and (labels + 1) × folds × takes made of each fits of the witness;
// memory holds the bounded sample and its descriptions. The error is that of
// the options, of the maker, of takes that cannot be described, or of the
// context.
func Measure(ctx context.Context, takes []*channels.Take, scales *channels.Scales, m classify.Maker, o Options) (*Report, error) {
	all, err := Compare(ctx, takes, scales, []Variant{{Maker: m}}, o)
	if err != nil {
		return nil, err
	}
	return all[0].Report, nil
}

// sample is the recorded takes looked at, described once for every maker.
type sample struct {
	witness *witness
	scales  *channels.Scales
	takes   []*channels.Take // label by label
	leftOut int
	labels  []run
	points  [][]float64
	sources []described
	powers  [][]float64 // exponents of each take
	uppers  []float64
}

// run is where the takes of a label begin and end.
type run struct {
	label      string
	begin, end int
}

// choose keeps the first takes of every label.
func choose(takes []*channels.Take, most int) (kept []*channels.Take, labels []run) {
	by := make(map[string][]*channels.Take)
	var names []string
	for _, t := range takes {
		if len(by[t.Label]) == 0 {
			names = append(names, t.Label)
		}
		if len(by[t.Label]) < most {
			by[t.Label] = append(by[t.Label], t)
		}
	}
	slices.Sort(names)
	for _, n := range names {
		labels = append(labels, run{n, len(kept), len(kept) + len(by[n])})
		kept = append(kept, by[n]...)
	}
	return kept, labels
}

func newSample(ctx context.Context, takes []*channels.Take, scales *channels.Scales, o Options) (*sample, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	if len(takes) == 0 {
		return nil, errors.New("there are no recorded takes to hold synthetic ones against")
	}
	if len(takes[0].Layout.Groups) == 0 {
		panic("realism: the layout of the takes has no channel groups")
	}
	o = o.withDefaults()
	w, err := newWitness(o, takes[0].Width())
	if err != nil {
		return nil, err
	}
	s := &sample{witness: w, scales: scales}
	s.takes, s.labels = choose(takes, o.MostPerLabel)
	s.leftOut = len(takes) - len(s.takes)
	for l, r := range s.labels {
		for _, t := range s.takes[r.begin:r.end] {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			p, f, err := s.lay(t)
			if err != nil {
				return nil, err
			}
			s.points, s.sources = append(s.points, p), append(s.sources, described{label: l, recorded: f})
			s.powers, s.uppers = append(s.powers, exponents(t)), append(s.uppers, upper(t))
		}
	}
	w.deal(s.sources)
	return s, nil
}

// lay returns a take's values at the common instants and its features.
func (s *sample) lay(t *channels.Take) (values, features []float64, err error) {
	if err := t.Validate(); err != nil {
		return nil, nil, err
	}
	laid := point(t, s.scales)
	features, err = s.witness.describe(laid)
	return laid.Data, features, err
}

// made gathers what is measured of the synthetic takes of one maker.
type made struct {
	report  Report
	sources []described
	points  [][][]float64
	powers  [2][]float64
	uppers  []float64 // per source, mean of its synthetic takes; NaN for none
}

// report makes takes from the sample and measures them.
func (s *sample) report(ctx context.Context, m classify.Maker) (*Report, error) {
	d := &made{sources: slices.Clone(s.sources)}
	d.report = Report{Recorded: len(s.takes), LeftOut: s.leftOut}
	for i := range s.takes {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := s.make(d, m, i); err != nil {
			return nil, err
		}
	}
	d.report.PowerLaw, d.report.Band = d.powerLaw(), d.band(s.uppers)
	if err := s.judge(ctx, d); err != nil {
		return nil, err
	}
	return &d.report, nil
}

// make makes takes from one source.
func (s *sample) make(d *made, m classify.Maker, i int) error {
	t, n := s.takes[i], s.witness.options.PerTake
	takes, err := m.Make(t, n)
	if err != nil {
		return fmt.Errorf("make takes from %s: %w", t.ID, err)
	}
	d.report.Synthetic, d.report.Shortfall = d.report.Synthetic+len(takes), d.report.Shortfall+n-len(takes)
	var points [][]float64
	var uppers, powers []float64
	for _, x := range takes {
		p, f, err := s.lay(x)
		if err != nil {
			return fmt.Errorf("takes made from %s: %w", t.ID, err)
		}
		points, d.sources[i].made = append(points, p), append(d.sources[i].made, f)
		uppers, powers = append(uppers, upper(x)), append(powers, exponents(x)...)
	}
	d.points, d.uppers = append(d.points, points), append(d.uppers, mean(uppers))
	if len(s.powers[i]) > 0 && len(powers) > 0 {
		d.powers[0], d.powers[1] = append(d.powers[0], mean(s.powers[i])), append(d.powers[1], mean(powers))
	}
	return nil
}

func (d *made) powerLaw() *PowerLaw {
	n := len(d.powers[0])
	if n == 0 {
		return nil
	}
	differences := make([]float64, n)
	for i, v := range d.powers[1] {
		differences[i] = v - d.powers[0][i]
	}
	out := &PowerLaw{Recorded: mean(d.powers[0]), Synthetic: mean(d.powers[1]), Paths: n}
	out.Change, _ = change(differences)
	return out
}

func (d *made) band(recorded []float64) *Band {
	var before, after, differences []float64
	for i, v := range d.uppers {
		if !math.IsNaN(v) {
			before, after, differences = append(before, recorded[i]), append(after, v), append(differences, v-recorded[i])
		}
	}
	out := &Band{Recorded: mean(before), Synthetic: mean(after)}
	if len(differences) == 0 || out.Recorded == 0 {
		return nil
	}
	out.Change, _ = change(differences)
	out.Growth = out.Synthetic/out.Recorded - 1
	return out
}

// judge measures spread and calls the witness, label by label and together.
func (s *sample) judge(ctx context.Context, d *made) error {
	for _, r := range s.labels {
		if err := ctx.Err(); err != nil {
			return err
		}
		right, err := s.witness.right(d.sources[r.begin:r.end])
		if err != nil {
			return err
		}
		points := slices.Concat(d.points[r.begin:r.end]...)
		d.report.right = append(d.report.right, right...)
		d.report.Labels = append(d.report.Labels, Label{
			Label: r.label, Recorded: r.end - r.begin, Synthetic: len(points),
			Spread: spread(s.points[r.begin:r.end], points), Witness: s.witness.sum(right),
		})
	}
	var err error
	d.report.together, err = s.witness.right(d.sources)
	d.report.Spread = spreads(d.report.Labels)
	d.report.Witness, d.report.Together = s.witness.sum(d.report.right), s.witness.sum(d.report.together)
	return err
}
