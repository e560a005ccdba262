package export

import (
	"fmt"

	"strandwise/channels"
	"strandwise/channels/body"
	"strandwise/export/pages"
)

// SkeletonsKey is the key of the skeletons in the metadata of a file of the
// table takes: a JSON list of [SkeletonTakes]. Files without takes of a
// skeleton lack it.
const SkeletonsKey = "strandwise.skeletons"

// SkeletonTakes is one skeleton and the takes, recorded and synthetic, whose
// channels are the places and turns of its joints.
type SkeletonTakes struct {
	Takes    []string       `json:"takes"` // by id, in the order of the rows
	Skeleton *body.Skeleton `json:"skeleton"`
}

// TakeFacts gathers what the metadata of a file say of all takes in it: their
// common rate and their skeletons. It holds each skeleton once and the ids of
// the takes that have one. The zero value is ready for use.
type TakeFacts struct {
	rate      commonRate
	skeletons []SkeletonTakes
	known     map[string]int // place of each skeleton, by its JSON
	last      *body.Skeleton // of the take before, whose draws share it
	lastAt    int
}

// Note takes up a take. The error tells of a skeleton that is none.
func (f *TakeFacts) Note(t *channels.Take) error {
	if t.Skeleton != nil {
		if err := f.noteSkeleton(t.ID, t.Skeleton); err != nil {
			return fmt.Errorf("take %s: skeleton: %w", t.ID, err)
		}
	}
	f.rate.take(t.Rate())
	return nil
}

func (f *TakeFacts) noteSkeleton(id string, s *body.Skeleton) error {
	if s != f.last {
		if err := s.Validate(); err != nil {
			return err
		}
		text, err := marshal(s, "")
		if err != nil {
			return err
		}
		at, ok := f.known[string(text)]
		if !ok {
			at = f.addSkeleton(s, string(text))
		}
		f.last, f.lastAt = s, at
	}
	entry := &f.skeletons[f.lastAt]
	entry.Takes = append(entry.Takes, id)
	return nil
}

func (f *TakeFacts) addSkeleton(s *body.Skeleton, text string) (at int) {
	if f.known == nil {
		f.known = map[string]int{}
	}
	at = len(f.skeletons)
	f.known[text] = at
	f.skeletons = append(f.skeletons, SkeletonTakes{Skeleton: s})
	return at
}

// Metadata returns what a file in the form of the table takes says of itself
// and the takes noted, in the order it is written: the [FileLayout], and the
// skeletons if there are any.
func (f *TakeFacts) Metadata(l *channels.Layout, version string) ([]pages.KeyValue, error) {
	return f.metadata(l, Takes, version)
}

func (f *TakeFacts) metadata(l *channels.Layout, kind Table, version string) ([]pages.KeyValue, error) {
	text, err := marshal(FileLayout{
		Format: layoutFormat, ProgramVersion: version, Table: kind, RateHz: f.rate.value(),
		Layout: describeLayout(l), Cautions: Cautions(),
	}, "")
	if err != nil {
		return nil, err
	}
	out := []pages.KeyValue{{Key: LayoutKey, Value: string(text)}}
	if len(f.skeletons) > 0 {
		if text, err = marshal(f.skeletons, ""); err != nil {
			return nil, err
		}
		out = append(out, pages.KeyValue{Key: SkeletonsKey, Value: string(text)})
	}
	return out, nil
}
