package report

import "strandwise/channels"

// Input is all that the page tells. What is left out is said to be missing; see
// [Absent].
type Input struct {
	Title    string   // of the set; empty is "A set of takes"
	Verdict  string   // of the score, one plain sentence
	Cautions []string // what whoever uses the set must know
	Notices  []string // what the run had to say about itself

	Counts  []Count  // takes by label, subject and split; see [Collector.Counts]
	Repairs []Repair // faults that were put right

	Making    []string // how takes were made, one plain sentence each
	Variation []Size   // how takes of a label were found to differ

	Labels   []Label // takes to look at, in the order they are to stand; see [Collector.Labels]
	Coupling []Pair  // how far limbs share their timing
	Gates    Gates
	Score    *Score // nil when nothing was scored
	Harm     *Harm  // nil when no inner validation was done

	Provenance Provenance
	Absent     Absent
}

// Absent says why a part of the input is missing, in words that may follow a
// colon: "the recordings hold a single label". Where it says nothing the page
// says only that the part is missing.
type Absent struct {
	Repairs, Variation, Labels, Coupling, Gates, Score, Harm string
}

// Count is the number of takes of one label, subject and split. Session does
// not matter.
type Count struct {
	Label     string
	Subject   string // empty when not stated
	Split     channels.Split
	Recorded  int
	Synthetic int
}

// Repair is one kind of fault in the recordings, and how often it was put
// right.
type Repair struct {
	What  string // "frames filled in short gaps"
	Count int64
}

// Size is one size of variation: a standard deviation over takes, or what What
// says.
type Size struct {
	Label string // empty for all labels together
	What  string // "timing", "trim", "orientation" …
	Of    string // the limb, channel group or channel; empty for the whole take
	Unit  string // "log", "of take", "rad", "of size", or a channel's unit

	Measured  float64 // what the recordings show; meaningless where Default
	Low, High float64 // its 95 % interval
	Used      float64 // what takes were made with
	Default   bool    // nothing was measured: Used is the documented default
	Pairs     int     // pairs of takes behind it
	Takes     int     // takes behind it
	Why       string  // why it is a default
}

// Label holds takes of one label to look at, and how far takes are from the
// middle of the label.
type Label struct {
	Name      string
	Recorded  []*channels.Take // a few that train; see [MostRecorded]
	Synthetic []*channels.Take // a few; see [MostSynthetic]

	// Distances to the label's medoid, the recorded take that has the least sum of
	// distances to the others: of the recorded takes but itself, and of the
	// synthetic ones.
	RecordedDistances  []float64
	SyntheticDistances []float64
	DistanceUnit       string // as it follows a number: "m", "× rms size"
	// Wasserstein is the Wasserstein-1 distance of the two samples in the same
	// unit; see [Wasserstein].
	Wasserstein float64
}

// Pair says how far two limbs share their timing.
type Pair struct {
	Label     string // empty for all labels together
	A, B      string // limbs
	Rho       float64
	Low, High float64 // 95 % interval
	P         float64 // of a permutation test against independence
	Takes     int     // behind it
	TooFew    bool    // too few takes to tell; the numbers are not shown
}

// Gates says what draws had to pass and how they did.
type Gates struct {
	List    []Gate
	Wanted  int64 // takes asked for
	Made    int64 // takes made
	Checked int64 // draws checked
	Passed  int64 // of them, passed every gate
}

// Gate is one thing that is checked.
type Gate struct {
	Name    string // "jerk"
	Wants   string // of a draw, with its threshold and unit: "at most 1.5 times the recorded rms jerk"
	Failed  int64
	Checked int64 // 0 where the gate was not applied
}

// Provenance says where the set came from and how to make it again.
type Provenance struct {
	Program    string // name and version
	Command    string // that makes the same set again
	Seed       uint64
	Plan       string // as TOML
	Recordings []File // what was read
	Files      []File // of the set, as far as they were written before this page
}

// File is a file with the hash of its bytes.
type File struct {
	Path   string
	Bytes  int64
	SHA256 string // in hexadecimal
}
