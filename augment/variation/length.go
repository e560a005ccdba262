package variation

import (
	"math"

	"gonum.org/v1/gonum/stat"
)

// Lengths that are told apart, as fractions of the take. Of a process much
// longer than half the take only its slope is seen.
const (
	shortest = 0.03
	longest  = 0.6
)

// priorSpread is the standard deviation of the logarithm of a correlation
// length that is assumed beforehand.
const priorSpread = 0.5

// lengths finds a correlation length from two columns that answer to one part.
// Their slopes have a ratio that is a known function of the length, but for a
// factor that the model gives.
type lengths struct {
	cal    calibration
	of, to int // columns
	ratio  func(length float64) float64
	factor float64
}

func newLengths(cal calibration, of, to int, ratio func(float64) float64, length float64) lengths {
	return lengths{cal, of, to, ratio, cal.slope[of] / cal.slope[to] / ratio(length)}
}

// timingLengths finds the length of the timing of which the slope is in a
// column and the bend in the one after it.
func (e *engine) timingLengths(column int, cal calibration) lengths {
	return newLengths(cal, column+1, column, bendToSlope, cal.at.timingLength)
}

// shapeLengths finds the length of the shape of all groups together.
func (e *engine) shapeLengths(cal calibration) lengths {
	last := len(e.layout.Groups)
	return newLengths(cal, e.columns.increment+last, e.columns.shape+last, incrementToShape, cal.at.shapeLength)
}

// find returns the length and its interval. Where takes are few the length
// hardly shows, so it is drawn towards a centre by as much as the takes leave
// open: it is the mean of the logarithm under a normal distribution about the
// centre. Of takes that show none it is NaN.
func (l lengths) find(all evidence, centre float64) (length, low, high float64) {
	shown := math.Log(l.shown(all.squares))
	if math.IsNaN(shown) {
		return shown, shown, shown
	}
	var logs []float64
	for _, r := range all.replicas {
		if v := l.shown(r); !math.IsNaN(v) {
			logs = append(logs, math.Log(v))
		}
	}
	open := leastSpread(2 * all.freedom)
	if len(logs) > 1 {
		open = max(open, stat.StdDev(logs, nil))
	}
	mean := (shown*square(priorSpread) + math.Log(centre)*square(open)) / (square(priorSpread) + square(open))
	sd := priorSpread * open / math.Hypot(priorSpread, open)
	// The way to the centre is no evidence: it counts as error.
	w := student(all.freedom) * math.Hypot(sd, mean-shown)
	return math.Exp(mean), math.Exp(mean - w), min(1, math.Exp(mean+w))
}

// shown returns the length that the columns show by themselves, NaN if none.
func (l lengths) shown(squares []float64) float64 {
	of, to := squares[l.of]-l.cal.floor[l.of], squares[l.to]-l.cal.floor[l.to]
	if !(to > shows*squares[l.to]) || !(l.factor > 0) {
		return math.NaN()
	}
	return inverse(l.ratio, max(0, of)/to/l.factor)
}

// plain returns the length that the columns would show if nothing else
// differed.
func (l lengths) plain(squares []float64) float64 {
	return inverse(l.ratio, squares[l.of]/squares[l.to])
}

// inverse finds where a monotone function of the length has a value, by
// bisection; beyond its ends it returns the end.
func inverse(f func(float64) float64, value float64) float64 {
	low, high := shortest, longest
	rising := f(high) > f(low)
	for range 40 {
		middle := math.Sqrt(low * high)
		if (f(middle) < value) == rising {
			low = middle
		} else {
			high = middle
		}
	}
	return math.Sqrt(low * high)
}

// incrementToShape returns the ratio of half the mean squared increment of a
// process over a sixteenth of the take to its variance about its mean.
func incrementToShape(length float64) float64 {
	z := incrementShare / length
	return (1 - math.Exp(-z*z/2)) / square(within(length))
}

// bendToSlope returns the ratio of the mean squared distance of a timing map
// from a straight line to the mean squared log slope over windows of an eighth
// of the take, for small log rates of the correlation length. With G(u) the
// integral of the log rate from 0 to u, W(u) its variance and
//
//	c(u) = cov(G(u), G(1)) = (W(u) + W(1) − W(1−u)) / 2
//
// the first is the variance of G(u) − u·G(1), and the second that of
// (G(u+h) − G(u))/h − G(1), both on average over u.
func bendToSlope(length float64) float64 {
	const steps = 32
	variance := func(u float64) float64 { return u * u * meanVariance(max(u, 1e-9), length) }
	whole := variance(1)
	shared := func(u float64) float64 { return (variance(u) + whole - variance(1-u)) / 2 }
	bend, slope, h := 0.0, 0.0, slopeWindow
	for k := range steps {
		u := (float64(k) + 0.5) / steps
		bend += (variance(u) + u*u*whole - 2*u*shared(u)) / steps
		v := u * (1 - h)
		slope += (variance(h)/(h*h) + whole - 2*(shared(v+h)-shared(v))/h) / steps
	}
	return bend / slope
}

// within returns the standard deviation over a take, about the take's mean, of
// a process of variance 1: what is left of a log rate when the take is brought
// to its length.
func within(length float64) float64 { return math.Sqrt(1 - meanVariance(1, length)) }

// meanVariance returns the variance of the mean over a window h of a process of
// variance 1 and covariance exp(−x²/(2ℓ²)): 2/h² ∫ (h−x) exp(−x²/(2ℓ²)) dx
// from 0 to h.
func meanVariance(h, length float64) float64 {
	z := h / length
	return (math.Sqrt(2*math.Pi)*z*math.Erf(z/math.Sqrt2) - 2*(1-math.Exp(-z*z/2))) / (z * z)
}
