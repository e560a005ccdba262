package classify

import (
	"cmp"
	"context"
	"crypto/sha256"
	"encoding/binary"
	"fmt"
	"slices"

	"strandwise/channels"
)

// Sample keeps a bounded number of takes of each label and split out of any
// number. Which ones depends on the seed and the takes' ids but not on the
// order in which they come: the m with the smallest keyed hashes. Memory holds
// at most 2m takes per label and split.
type Sample struct {
	most   int
	seed   uint64
	seen   int
	strata map[stratum][]draw
}

type stratum struct {
	label string
	split channels.Split
}

type draw struct {
	hash    uint64
	arrival int
	take    *channels.Take
}

// NewSample returns a sample of at most m takes, at least 1, per label and
// split.
func NewSample(m int, seed uint64) *Sample {
	if m < 1 {
		panic("classify: a sample keeps at least one take per label")
	}
	return &Sample{most: m, seed: seed, strata: make(map[stratum][]draw)}
}

// Add offers a take. The sample owns it from then on.
func (s *Sample) Add(t *channels.Take) {
	k := stratum{t.Label, t.Split}
	draws := append(s.strata[k], draw{s.hash(t.ID), s.seen, t})
	if len(draws) >= 2*s.most {
		draws = s.cut(draws)
	}
	s.strata[k] = draws
	s.seen++
}

// hash returns the first eight bytes of the SHA-256 of the seed and the id.
func (s *Sample) hash(id string) uint64 {
	key := binary.BigEndian.AppendUint64(make([]byte, 0, 8+len(id)), s.seed)
	sum := sha256.Sum256(append(key, id...))
	return binary.BigEndian.Uint64(sum[:])
}

// cut keeps the draws with the smallest hashes and lets go of the others.
func (s *Sample) cut(draws []draw) []draw {
	slices.SortFunc(draws, func(a, b draw) int {
		return cmp.Or(cmp.Compare(a.hash, b.hash), cmp.Compare(a.take.ID, b.take.ID))
	})
	if len(draws) > s.most {
		clear(draws[s.most:])
		draws = draws[:s.most]
	}
	return draws
}

// Takes returns the takes kept, in the order in which they came.
func (s *Sample) Takes() []*channels.Take {
	var kept []draw
	for k, draws := range s.strata {
		s.strata[k] = s.cut(draws)
		kept = append(kept, s.strata[k]...)
	}
	slices.SortFunc(kept, func(a, b draw) int { return cmp.Compare(a.arrival, b.arrival) })
	out := make([]*channels.Take, len(kept))
	for i, d := range kept {
		out[i] = d.take
	}
	return out
}

// Shrink lowers the number of takes kept per label and split to m, at least 1.
func (s *Sample) Shrink(m int) { s.most = max(min(m, s.most), 1) }

// LeftOut returns how many of the takes offered are not kept.
func (s *Sample) LeftOut() int { return s.seen - len(s.Takes()) }

// Score is [Score] on the takes kept; the report notes how many were left out.
func (s *Sample) Score(ctx context.Context, fit Fit, o Options, progress func(done, total int)) (*Report, error) {
	r, err := Score(ctx, s.Takes(), fit, o, progress)
	return s.note(r), err
}

// Compare is [Compare] on the takes kept; the report notes how many were left
// out.
func (s *Sample) Compare(ctx context.Context, methods []Method, o Options, progress func(done, total int)) (*Report, error) {
	r, err := Compare(ctx, s.Takes(), methods, o, progress)
	return s.note(r), err
}

// note adds to a report, unless it is nil, how many takes were left out.
func (s *Sample) note(r *Report) *Report {
	if n := s.LeftOut(); r != nil && n > 0 {
		r.Notes = append(r.Notes, fmt.Sprintf("Scored on a sample: %d of %d takes were left out, at most %d kept per label and split.", n, s.seen, s.most))
	}
	return r
}
