package align

// Medoid returns which of n items is nearest to all others: the one with the
// smallest summed distance, the first of several as near, and every item's
// distance to it, which is 0 for the medoid itself. distance is called once
// for every pair i < j and taken to be the same both ways. Of no items the
// medoid is -1.
func Medoid(n int, distance func(i, j int) float64) (medoid int, toMedoid []float64) {
	if n <= 0 {
		return -1, nil
	}
	between := make([]float64, n*n)
	sums := make([]float64, n)
	for i := range n {
		for j := i + 1; j < n; j++ {
			d := distance(i, j)
			between[i*n+j], between[j*n+i] = d, d
			sums[i] += d
			sums[j] += d
		}
	}
	for i, s := range sums {
		if s < sums[medoid] {
			medoid = i
		}
	}
	return medoid, between[medoid*n : (medoid+1)*n : (medoid+1)*n]
}
