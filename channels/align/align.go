package align

// Options says what an alignment may do and what it costs. Start from
// [Default].
type Options struct {
	Band   float64 // half width of the Sakoe–Chiba band about the diagonal, as a fraction of the longer take
	Open   float64 // fraction of a take's frames that may be passed over at each end of it
	Step   float64 // extra price of a step that is not diagonal, in mean local costs of the diagonal
	Skip   float64 // price of a frame passed over, in mean local costs of the diagonal
	Smooth float64 // standard deviation in frames of the Gaussian that smooths the map; 0 for none
}

// Default returns the options that served best in measuring how takes of one
// label differ: a band of a fifth, an eighth open at each end, 0.1 for a step
// and 0.5 for a frame passed over, smoothed over 2 frames.
func Default() Options {
	return Options{Band: 1.0 / 5, Open: 1.0 / 8, Step: 0.1, Skip: 0.5, Smooth: 2}
}

// Alignment maps the frames of one take, a, to those of another, b.
type Alignment struct {
	// At holds, per frame of a, the frame of b it matches, as a fraction
	// between 0 and the last frame of b. It never decreases. Frames of a that
	// were passed over hold the first or the last frame of b.
	At []float64

	// Cost is the mean local cost along the path: the mean squared difference
	// of matched values, without the prices of steps and frames passed over.
	Cost float64

	// First and Last are the first and the last frame of a with a match.
	First, Last int

	// Begin and End are how many frames of b lie between where a begins or
	// ends and where b does: Begin is positive when a begins within b and
	// negative when a begins before b; End is positive when a goes on after b
	// and negative when a ends within b.
	Begin, End int
}

// Align aligns a to b, both frames × width values, frame-major, of at least
// one frame each. The two need not have the same number of frames. It panics
// when the values are not whole frames.
func Align(a, b []float64, width int, o Options) Alignment {
	return NewAligner(o).Align(a, b, width)
}

// Aligner aligns many pairs of takes in the same memory. It is not for use by
// several goroutines at once.
type Aligner struct {
	o Options
	g grid
	s smoother
}

// NewAligner returns an aligner with these options.
func NewAligner(o Options) *Aligner { return &Aligner{o: o} }

// Align is [Align] in the aligner's memory; the result belongs to the caller.
func (w *Aligner) Align(a, b []float64, width int) Alignment {
	if width < 1 || len(a) == 0 || len(b) == 0 || len(a)%width != 0 || len(b)%width != 0 {
		panic("align: values are not whole frames, at least one each")
	}
	w.g.lay(a, b, width, w.o)
	w.g.fill()
	al := w.g.trace()
	w.s.smooth(al.At[al.First:al.Last+1], w.o.Smooth)
	return al
}
