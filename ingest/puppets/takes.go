package puppets

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
	"strandwise/channels/group"
)

const (
	takesPerCue   = 5
	matineeTakes  = 3
	finale        = "thunder-roll" // the cue whose last take the liveliest puppeteer plays to the gallery
	galleryVigour = 1.7
)

// part is one take to be recorded: who, what, when.
type part struct {
	person  person
	cue     cue
	session string
	take    int // from 1
	vigour  float64
}

// id returns the take's id: its path without the ending.
func (p part) id() string {
	return fmt.Sprintf("%s/%s_%s_%d", p.person.name, p.cue.label, p.session, p.take)
}

// programme lists the parts in order of id.
func programme(seed uint64) []part {
	var out []part
	all := company(seed)
	liveliest := slices.MaxFunc(all, func(a, b person) int { return cmp.Compare(a.liveliness(), b.liveliness()) })
	for _, who := range all {
		for _, c := range cues() {
			for take := 1; take <= takesPerCue; take++ {
				p := part{who, c, "matinee", take, 1}
				if take > matineeTakes {
					p.session = "evening"
				}
				if take == takesPerCue && c.label == finale && who.name == liveliest.name {
					p.vigour = galleryVigour
				}
				out = append(out, p)
			}
		}
	}
	slices.SortFunc(out, func(a, b part) int { return strings.Compare(a.id(), b.id()) })
	return out
}

// liveliness ranks people by the acceleration of their strokes.
func (p person) liveliness() float64 { return p.amplitude * p.size / (p.pace * p.pace) }

// play records one part.
func (p part) play(seed uint64, layout *channels.Layout) *channels.Take {
	worn := p.person.wear(generator(seed, p.person.name+"/"+p.session))
	rng := generator(seed, fmt.Sprintf("%s/%s/%d", p.person.name, p.cue.label, p.take))
	time, data := record(rng, p.person.perform(rng, p.cue, worn.seat, p.vigour), worn)
	return &channels.Take{
		ID: p.id(), Label: p.cue.label, Subject: p.person.name, Session: p.session,
		Where: "puppets:" + p.id(), Layout: layout, Time: time, Data: data,
	}
}

// names lists the channels in the order of a recording's columns.
func names() []string {
	var out []string
	for _, point := range []string{"left_wrist", "right_wrist"} {
		for _, kind := range []string{"accel", "gyro"} {
			for _, axis := range []string{"x", "y", "z"} {
				out = append(out, point+"."+kind+"."+axis)
			}
		}
	}
	return out
}

// layout returns the channels of a recording and their groups.
func layout() *channels.Layout {
	l := &channels.Layout{}
	for _, name := range names() {
		c, _ := channels.ParseHeader(name)
		l.Channels = append(l.Channels, c)
	}
	l.Groups = group.FromNames(l.Channels)
	return l
}

// Takes streams the 120 takes in order of their ids, in SI units, with time in
// seconds from the first frame. One layout serves all: twelve channels,
// left_wrist.accel.x to right_wrist.gyro.z, in a group for each sensor and a
// limb for each arm. The same seed gives the same takes; the stream never ends
// in an error. They are the takes that [WriteCSV] writes, value for value.
func Takes(seed uint64) channels.Stream {
	return func(yield func(*channels.Take, error) bool) {
		l := layout()
		for _, p := range programme(seed) {
			if !yield(p.play(seed, l), nil) {
				return
			}
		}
	}
}
