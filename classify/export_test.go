package classify

import "math/rand/v2"

// KernelGenerator returns the generator that the convolution learner of a seed
// draws its kernels from.
func KernelGenerator(seed uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, kernelStream)) }

// PairedInterval is the interval of the share of errors before less that
// after, of so many tests.
func PairedInterval(tested, before, after, both int) (low, high float64) {
	return difference(errorCount{tested, before, after, both})
}
