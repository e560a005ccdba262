package classify

import "math/rand/v2"

// KernelGenerator returns the generator that the convolution learner of a seed
// draws its kernels from.
func KernelGenerator(seed uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, kernelStream)) }
