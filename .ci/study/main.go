// Command study holds ways of making takes against recorded takes alone on open
// sets, with a few takes of each label: the tables in DEVELOPERS.md come from it.
//
//	go run . -data ../../../shared/data/sets -k 1,2,3,5 -repeats 10 recipe time-warp path
//	go run . -normalise z -learners EDC recipe
//	go run . -sets NATOPS,hands -learners EDG recipe/coupling=1 recipe/coupling=0 recipe
//
// A way is a method by name, or "recipe" with changes after slashes: defaults
// (nothing is measured), nogates, reach=, coupling=, timeshare=, timing=, mix=
// and every size of variation, such as offset=0.2. Sets are read from
// NAME/train.csv and NAME/test.csv and pooled; "hands" is three performances of
// the invented theatre's three cues in which the hands keep no common time.
//
// Learners: E and D are nearest templates by euclidean-dependent and dtw-dependent
// (band 10 %), C by direction-cosine, G convolution features on takes brought to
// mean 0 and deviation 1, g on takes as they are.
package main

import (
	"context"
	"flag"
	"fmt"
	"log"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"strandwise/augment"
	"strandwise/augment/gate"
	"strandwise/augment/variation"
	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/classify"
	"strandwise/classify/convolution"
	"strandwise/classify/template"
	"strandwise/ingest"
	"strandwise/ingest/puppets"
)

func main() {
	log.SetFlags(0)
	data := flag.String("data", "../../../shared/data/sets", "folder of the sets")
	sets := flag.String("sets", "BasicMotions,NATOPS,UWaveGestureLibrary,Libras,Epilepsy,UTD_MHAD_inertial", "sets to study")
	counts := flag.String("k", "1,3", "recorded takes per label")
	s := study{}
	flag.IntVar(&s.repeats, "repeats", 10, "random splits")
	flag.IntVar(&s.perTake, "per-take", 32, "synthetic takes per recorded one")
	flag.StringVar(&s.normalise, "normalise", "none", "of templates: none or z")
	flag.StringVar(&s.learners, "learners", "EDCGg", "who learns")
	flag.Parse()
	for _, text := range strings.Split(*counts, ",") {
		k, err := strconv.Atoi(text)
		if err != nil {
			log.Fatal(err)
		}
		s.counts = append(s.counts, k)
	}
	for _, text := range flag.Args() {
		w, err := parseWay(text)
		if err != nil {
			log.Fatal(err)
		}
		s.ways = append(s.ways, w)
	}
	for _, set := range strings.Split(*sets, ",") {
		takes, err := load(*data, set)
		if err == nil {
			err = s.run(set, takes)
		}
		if err != nil {
			log.Fatalf("%s: %v", set, err)
		}
	}
	s.summary()
}

// load reads a set. Channels without names are grouped in threes, and the two
// sides of NATOPS, which its description names, are two limbs.
func load(dir, set string) ([]*channels.Take, error) {
	var out []*channels.Take
	if set == "hands" {
		for seed := range uint64(3) {
			for t, err := range puppets.Takes(seed + 1) {
				if err != nil {
					return nil, err
				}
				if t.Label == "rain-patter" || t.Label == "light-lantern" || t.Label == "snuff-lantern" {
					t.ID, t.Subject = fmt.Sprint(seed, t.ID), fmt.Sprint(seed, t.Subject)
					if len(out) > 0 {
						t.Layout = out[0].Layout
					}
					out = append(out, t)
				}
			}
		}
		return out, nil
	}
	r, err := ingest.Open(ingest.Options{Paths: []string{filepath.Join(dir, set, "train.csv"), filepath.Join(dir, set, "test.csv")}, Rate: 50})
	if err != nil {
		return nil, err
	}
	defer r.Close()
	for t, err := range r.Takes() {
		if err != nil {
			return nil, err
		}
		if set == "NATOPS" && len(out) == 0 {
			groups := t.Layout.Groups
			for i := range groups {
				groups[i].Limb = []string{"left", "right"}[i%2]
			}
			if t.Layout, err = t.Layout.WithGroups(groups); err != nil {
				return nil, err
			}
		}
		if len(out) > 0 {
			t.Layout = out[0].Layout
		}
		out = append(out, t)
	}
	return out, nil
}

// way is a way of making takes under a name.
type way struct {
	name              string
	variation         augment.Variation
	defaults, nogates bool
}

func parseWay(text string) (way, error) {
	parts := strings.Split(text, "/")
	m, err := augment.ParseMethod(parts[0])
	if err != nil {
		return way{}, err
	}
	w := way{name: text, variation: augment.Published(m)}
	if m == augment.Recipe {
		w.variation = augment.Default()
	} else {
		w.defaults, w.nogates = true, true
	}
	for _, change := range parts[1:] {
		key, value, _ := strings.Cut(change, "=")
		x, _ := strconv.ParseFloat(value, 64)
		switch key {
		case "defaults":
			w.defaults = true
		case "nogates":
			w.nogates = true
		case "reach":
			w.variation.Reach = x
		case "coupling":
			w.variation.Coupling = &x
		case "timeshare":
			w.variation.TimeShare = x
		case "mix":
			w.variation.Mix = x
		case "spread":
			w.variation.Spread = x
		case "timing":
			w.variation.Timing = augment.Timing(value)
		default:
			part := variation.Part(strings.ReplaceAll(key, "-", " "))
			if key == "timing-spread" {
				part = variation.Timing
			}
			if !slices.Contains(variation.Parts(), part) {
				return w, fmt.Errorf("%s: unknown change %q", text, key)
			}
			w.variation.Sizes[part] = x
		}
	}
	return w, w.variation.Validate()
}

// fit measures the training takes of a split.
func (w way) fit(training []*channels.Take) (classify.Maker, error) {
	t := augment.Training{Scales: new(channels.Scales), Takes: training}
	for _, take := range training {
		t.Scales.Add(take)
	}
	o := variation.Default()
	o.Pairs, o.Total, o.Draws, o.Weights, o.Workers = 20, 100, 100, 20, 1
	var err error
	if t.Measured, err = variation.Measure(context.Background(), training, t.Scales, o); err != nil {
		return nil, err
	}
	if w.defaults { // but for the kind of motion
		t.Measured.Figures = nil
	} else {
		t.Coupling = group.MeasureCoupling(training, t.Scales, 1)
	}
	if !w.nogates {
		if t.Gates, err = gate.Fit(training, t.Scales, gate.Default()); err != nil {
			return nil, err
		}
	}
	return augment.NewMaker(w.variation, t, 1)
}

type study struct {
	counts              []int
	repeats, perTake    int
	normalise, learners string
	ways                []way
	saved               map[[2]string][]float64 // by way and learner, per cent, one per set and count
}

func (s *study) run(set string, takes []*channels.Take) error {
	o := classify.Options{Protocol: classify.Pooled, Band: 0.1, Normalise: template.Normalise(s.normalise), PerTake: s.perTake, TakesPerLabel: s.counts, Repeats: s.repeats, Seed: 1}
	for _, l := range s.learners {
		switch l {
		case 'E':
			o.Distances = append(o.Distances, template.EuclideanDependent)
		case 'D':
			o.Distances = append(o.Distances, template.DTWDependent)
		case 'C':
			o.Distances = append(o.Distances, "direction-cosine")
		case 'G':
			o.Learners = append(o.Learners, classify.Convolution(convolution.Options{Kernels: 300}, convolution.Ridge{Strength: 100}, 1))
		case 'g':
			o.Learners = append(o.Learners, raw{classify.Convolution(convolution.Options{Kernels: 300, Normalise: convolution.AsIs}, convolution.Ridge{Strength: 100}, 1)})
		}
	}
	var methods []classify.Method
	for _, w := range s.ways {
		methods = append(methods, classify.Method{Name: w.name, Fit: w.fit})
	}
	report, err := classify.Compare(context.Background(), takes, methods, o, nil)
	if err != nil {
		return err
	}
	if s.saved == nil {
		s.saved = make(map[[2]string][]float64)
	}
	for _, r := range report.Results {
		learner := string(r.Distance) + r.Learner
		saved := math.NaN()
		if r.Reduction != nil {
			saved = 100 * float64(*r.Reduction)
			s.saved[[2]string{r.Method, learner}] = append(s.saved[[2]string{r.Method, learner}], saved)
		}
		fmt.Printf("%-20s k=%d %-20s %-30s error %.3f, saved %.1f %%%s, %s\n", set, *r.TakesPerLabel, learner, r.Method, float64(r.Error), saved, interval(r), r.Finding)
	}
	return nil
}

// interval is the 95 % interval of what was saved.
func interval(r classify.Result) string {
	if r.ReductionLow == nil || r.ReductionHigh == nil {
		return ""
	}
	return fmt.Sprintf(" (%.1f to %.1f)", 100*float64(*r.ReductionLow), 100*float64(*r.ReductionHigh))
}

// raw is a learner under another name.
type raw struct{ classify.Learner }

func (raw) Name() string { return "convolution-as-is" }

func (s *study) summary() {
	for _, w := range s.ways {
		for _, learner := range []string{"euclidean-dependent", "dtw-dependent", "direction-cosine", "convolution", "convolution-as-is"} {
			list := s.saved[[2]string{w.name, learner}]
			if len(list) == 0 {
				continue
			}
			sum, least := 0.0, math.Inf(1)
			for _, x := range list {
				sum, least = sum+x, min(least, x)
			}
			fmt.Fprintf(os.Stdout, "mean of %d cells: %-30s %-20s saved %.1f %%, least %.1f\n", len(list), w.name, learner, sum/float64(len(list)), least)
		}
	}
}
