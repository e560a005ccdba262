package group

// Merge is one step of a grouping: two clusters become one.
type Merge struct {
	Members    []string `json:"members"`    // of the new cluster, in the order of the units
	Similarity float64  `json:"similarity"` // mean over the pairs across the two clusters
	Done       bool     `json:"done"`       // at or above the threshold
}

// cluster is a growing set of units, by index, ascending.
type cluster []int

// agglomerate joins units, n of them, by average linkage: the two clusters
// whose pairs of members are most alike on average are joined, until one is
// left (Sokal and Michener, "A statistical method for evaluating systematic
// relationships", University of Kansas Science Bulletin 38 (1958) 1409–1438).
// It returns all merges in order, and the clusters there are when only those
// of a similarity at or above the threshold are done, in the order of their
// first units. Of equal pairs the first is joined.
func agglomerate(n int, similarity func(i, j int) float64, threshold float64) (merges []merge, clusters []cluster) {
	for i := range n {
		clusters = append(clusters, cluster{i})
	}
	live := append([]cluster(nil), clusters...)
	for len(live) > 1 {
		a, b, best := 0, 1, averageLink(live[0], live[1], similarity)
		for i := range live {
			for j := i + 1; j < len(live); j++ {
				if s := averageLink(live[i], live[j], similarity); s > best {
					a, b, best = i, j, s
				}
			}
		}
		joined := union(live[a], live[b])
		live[a] = joined
		live = append(live[:b], live[b+1:]...)
		merges = append(merges, merge{joined, best})
		// Average linkage has no reversals: once below, no later merge is above.
		if best >= threshold {
			clusters = append([]cluster(nil), live...)
		}
	}
	return merges, clusters
}

// merge is a [Merge] by the indices of units.
type merge struct {
	members    cluster
	similarity float64
}

func averageLink(a, b cluster, similarity func(i, j int) float64) float64 {
	sum := 0.0
	for _, i := range a {
		for _, j := range b {
			sum += similarity(i, j)
		}
	}
	return sum / float64(len(a)*len(b))
}

// union merges two ascending lists without common elements.
func union(a, b cluster) cluster {
	out := make(cluster, 0, len(a)+len(b))
	for len(a) > 0 && len(b) > 0 {
		if a[0] < b[0] {
			out, a = append(out, a[0]), a[1:]
		} else {
			out, b = append(out, b[0]), b[1:]
		}
	}
	return append(append(out, a...), b...)
}
