package augment_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"
	"testing/synctest"

	"github.com/google/go-cmp/cmp"

	"strandwise/augment"
	"strandwise/channels"
)

// recordings is a run of takes in training, in test and in neither split.
func recordings(t testing.TB, n int) []*channels.Take {
	l := sensorLayout(t, 4)
	out := make([]*channels.Take, n)
	for i := range out {
		out[i] = wander(l, fmt.Sprint("take", i), 20+7*(i%5), uint64(i))
		out[i].Split = []channels.Split{channels.Train, channels.Test, channels.None}[i%3]
	}
	return out
}

// collect reads a stream to its end. It fails when the stream breaks its
// contract: an error comes once, last, and with no take.
func collect(t testing.TB, s channels.Stream) (takes []*channels.Take, fault error) {
	t.Helper()
	for take, err := range s {
		if fault != nil {
			t.Errorf("something follows the error %v", fault)
		}
		if (take == nil) == (err == nil) {
			t.Errorf("take %v and error %v at once", take, err)
		}
		if fault = err; err == nil {
			takes = append(takes, take)
		}
	}
	return takes, fault
}

// grown is what Grow must yield: each recorded take and then its draws, made
// one after the other.
func grown(m *augment.Maker, takes []*channels.Take, perTake int) []*channels.Take {
	var out []*channels.Take
	for _, take := range takes {
		out = append(out, take)
		if take.Split == channels.Test {
			continue
		}
		made, err := m.Make(take, perTake)
		if err != nil {
			panic(err)
		}
		out = append(out, made...)
	}
	return out
}

func TestGrowOrderAndContentsForAnyWorkers(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		takes := recordings(t, 9)
		m := maker(t, v, 1, takes...)
		for _, perTake := range []int{0, 1, 5} {
			want := grown(m, takes, perTake)
			for _, workers := range []int{-1, 1, 2, 7} {
				got, err := collect(t, augment.Grow(context.Background(), stream(takes...), m, augment.GrowOptions{PerTake: perTake, Workers: workers}))
				if err != nil {
					t.Fatal(err)
				}
				if diff := cmp.Diff(want, got); diff != "" {
					t.Errorf("%d per take, %d workers: %s", perTake, workers, diff)
				}
			}
		}
	})
}

func TestGrowOfNothing(t *testing.T) {
	got, err := collect(t, augment.Grow(context.Background(), stream(), maker(t, augment.Default(), 1), augment.GrowOptions{PerTake: 5, Workers: 2}))
	if len(got) != 0 || err != nil {
		t.Errorf("%d takes, %v", len(got), err)
	}
}

// The stream ends for good: no goroutine is left, and the same stream can be
// read again.
func TestGrowCanBeReadTwice(t *testing.T) {
	takes := recordings(t, 4)
	m := maker(t, augment.Default(), 1, takes...)
	synctest.Test(t, func(t *testing.T) {
		s := augment.Grow(t.Context(), stream(takes...), m, augment.GrowOptions{PerTake: 3, Workers: 2})
		first, _ := collect(t, s)
		second, _ := collect(t, s)
		if diff := cmp.Diff(first, second); diff != "" || len(first) == 0 {
			t.Errorf("the second reading differs: %s", diff)
		}
	})
}

func TestGrowPassesAnErrorOnLast(t *testing.T) {
	takes := recordings(t, 5)
	m := maker(t, augment.Default(), 1, takes...)
	torn := errors.New("wave.csv:7: torn row")
	broken := func(yield func(*channels.Take, error) bool) {
		for _, take := range takes {
			if !yield(take.Clone(), nil) {
				return
			}
		}
		if yield(nil, torn) {
			t.Error("the producer was asked for more after its error")
		}
	}
	for _, workers := range []int{1, 2, 7} {
		synctest.Test(t, func(t *testing.T) {
			got, err := collect(t, augment.Grow(t.Context(), broken, m, augment.GrowOptions{PerTake: 4, Workers: workers}))
			if !errors.Is(err, torn) {
				t.Errorf("%d workers: error %v, want %v", workers, err, torn)
			}
			if diff := cmp.Diff(grown(m, takes, 4), got); diff != "" {
				t.Errorf("%d workers: before the error: %s", workers, diff)
			}
		})
	}
}

// counter yields takes without end and counts them.
type counter struct {
	take    *channels.Take
	yielded int
	ended   bool
}

func (c *counter) stream(yield func(*channels.Take, error) bool) {
	defer func() { c.ended = true }()
	for {
		c.yielded++
		take := c.take.Clone()
		take.ID = fmt.Sprint(c.yielded)
		if !yield(take, nil) {
			return
		}
	}
}

// A receiver that stops early ends the producer before the range statement
// returns, and the producer was never far ahead. synctest fails the test when
// a goroutine is left behind.
func TestGrowEndsWithItsReceiver(t *testing.T) {
	for _, workers := range []int{1, 2, 7} {
		for _, perTake := range []int{0, 3} {
			for _, stop := range []int{1, 2, 50} {
				synctest.Test(t, func(t *testing.T) {
					c := &counter{take: wander(sensorLayout(t, 1), "", 20, 1)}
					received := 0
					for range augment.Grow(t.Context(), c.stream, maker(t, augment.Default(), 1, c.take), augment.GrowOptions{PerTake: perTake, Workers: workers}) {
						if received++; received == stop {
							break
						}
					}
					if !c.ended {
						t.Errorf("%d workers: the producer runs on", workers)
					}
					if ahead := c.yielded*(1+perTake) - received; ahead > (2*workers+2)*(1+perTake) {
						t.Errorf("%d workers, %d per take: the producer was %d takes ahead", workers, perTake, ahead)
					}
				})
			}
		}
	}
}

func TestGrowEndsWithItsContext(t *testing.T) {
	for _, workers := range []int{1, 2, 7} {
		synctest.Test(t, func(t *testing.T) {
			ctx, cancel := context.WithCancel(t.Context())
			defer cancel()
			c := &counter{take: wander(sensorLayout(t, 1), "", 20, 1)}
			received, fault := 0, error(nil)
			for take, err := range augment.Grow(ctx, c.stream, maker(t, augment.Default(), 1, c.take), augment.GrowOptions{PerTake: 3, Workers: workers}) {
				if fault != nil {
					t.Errorf("something follows the error %v", fault)
				}
				if fault = err; take != nil {
					received++
				}
				if received == 10 {
					cancel()
				}
			}
			if !errors.Is(fault, context.Canceled) || received < 10 || !c.ended {
				t.Errorf("%d workers: error %v after %d takes, producer ended: %v", workers, fault, received, c.ended)
			}
		})
	}
}

func TestGrowOfACancelledContext(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	takes := recordings(t, 3)
	_, err := collect(t, augment.Grow(ctx, stream(takes...), maker(t, augment.Default(), 1, takes...), augment.GrowOptions{PerTake: 3, Workers: 2}))
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error %v, want %v", err, context.Canceled)
	}
}

// Each take belongs to the receiver: what it writes into one does not show in
// any other.
func TestGrowGivesTakesAway(t *testing.T) {
	eachMethod(t, func(t *testing.T, v augment.Variation) {
		takes := recordings(t, 5)
		m := maker(t, v, 1, takes...)
		want := grown(m, takes, 4)
		k := 0
		for got, err := range augment.Grow(context.Background(), stream(takes...), m, augment.GrowOptions{PerTake: 4, Workers: 2}) {
			if err != nil {
				t.Fatal(err)
			}
			if !slices.Equal(got.Data, want[k].Data) || !slices.Equal(got.Time, want[k].Time) {
				t.Errorf("%s differs after takes before it were overwritten", got.ID)
			}
			for i := range got.Data {
				got.Data[i] = math.NaN()
			}
			for i := range got.Time {
				got.Time[i] = math.NaN()
			}
			k++
		}
		if k != len(want) {
			t.Errorf("%d takes, want %d", k, len(want))
		}
	})
}

// What is kept is the best choice of what was made.
func TestGrowKeepsTheBestChoice(t *testing.T) {
	takes := recordings(t, 4)
	m := maker(t, augment.Default(), 1, takes...)
	all, _ := collect(t, augment.Grow(t.Context(), stream(takes...), m, augment.GrowOptions{PerTake: 8}))
	var want []*channels.Take
	for _, take := range all {
		if take.Made == nil || take.Made.Rank < 3 {
			want = append(want, take)
		}
	}
	got, err := collect(t, augment.Grow(t.Context(), stream(takes...), m, augment.GrowOptions{PerTake: 8, Keep: 3, Workers: 2}))
	if diff := cmp.Diff(want, got); err != nil || diff != "" {
		t.Errorf("error %v; %s", err, diff)
	}
}

func TestGrowReportsEverySource(t *testing.T) {
	takes := recordings(t, 6)
	m := maker(t, augment.Default(), 1, takes...)
	reported := map[string]augment.Tally{}
	o := augment.GrowOptions{PerTake: 3, Workers: 2, Report: func(source string, tally augment.Tally) { reported[source] = tally }}
	if _, err := collect(t, augment.Grow(t.Context(), stream(takes...), m, o)); err != nil {
		t.Fatal(err)
	}
	for _, take := range takes {
		tally, ok := reported[take.ID]
		if ok == (take.Split == channels.Test) {
			t.Errorf("%s of split %q was reported: %v", take.ID, take.Split, ok)
		}
		if ok && (tally.Wanted != 3 || tally.Made != 3) {
			t.Errorf("%s: %+v", take.ID, tally)
		}
	}
}
