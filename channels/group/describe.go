package group

import (
	"fmt"
	"slices"
	"strings"

	"strandwise/channels"
)

// describe writes down groups and limbs with their evidence.
func (p *proposing) describe() {
	p.out.Groups, p.out.Limbs = []Proposed{}, []Proposed{}
	for _, g := range p.layout.Groups {
		p.out.Groups = append(p.out.Groups, p.group(g))
	}
	for _, limb := range p.layout.Limbs() {
		p.out.Limbs = append(p.out.Limbs, p.limb(limb))
	}
}

func (p *proposing) group(g channels.Group) Proposed {
	out := Proposed{Name: g.Name, Limb: g.Limb, Channels: channelNames(p.layout, g.Channels), From: []Source{p.found.of}}
	first := p.layout.Channels[g.Channels[0]]
	switch p.found.of {
	case Stated:
		out.Evidence = []string{"stated by the plan or the recordings"}
	case Numbers:
		out.Evidence = []string{fmt.Sprintf("%d columns in a row, numbered one after the other", len(g.Channels))}
	default:
		what := "names that say neither place nor quantity"
		if first.Quantity != channels.Misc {
			what = "names of one quantity, " + string(first.Quantity)
		}
		if first.TrackedPoint != "" && first.Quantity != channels.Misc {
			what += ", of one tracked point, " + first.TrackedPoint
		}
		out.Evidence = []string{what}
	}
	return out
}

func channelNames(l *channels.Layout, at []int) []string {
	out := make([]string, len(at))
	for i, c := range at {
		out[i] = l.Channels[c].Name
	}
	return out
}

func (p *proposing) limb(name string) Proposed {
	out := Proposed{Name: name, From: []Source{}, Evidence: []string{}}
	var groups []string
	for _, g := range p.layout.Groups {
		if g.Limb == name {
			groups = append(groups, g.Name)
			out.Channels = append(out.Channels, channelNames(p.layout, g.Channels)...)
		}
	}
	p.byOrigin(&out)
	p.byBones(&out, groups)
	p.byTriads(&out, groups)
	p.byData(&out)
	return out
}

func (p *proposing) byOrigin(out *Proposed) {
	evidence := map[Source]string{
		Stated:   "stated by the plan or the recordings",
		Names:    "side, limb or tracked point in the names",
		Skeleton: "side in the names, else the tree of joints",
	}[p.found.limbs]
	if evidence != "" {
		out.From, out.Evidence = append(out.From, p.found.limbs), append(out.Evidence, evidence)
	}
}

func (p *proposing) byBones(out *Proposed, groups []string) {
	count, lowest, highest := 0, 0.0, 0.0
	for _, b := range p.out.Bones {
		if slices.Contains(groups, b.A) && slices.Contains(groups, b.B) {
			if count == 0 {
				lowest, highest = b.Spread, b.Spread
			}
			lowest, highest = min(lowest, b.Spread), max(highest, b.Spread)
			count++
		}
	}
	if count > 0 {
		out.From = append(out.From, Bones)
		out.Evidence = append(out.Evidence, fmt.Sprintf("%d bones: distances that vary by %.2g to %.2g %%", count, 100*lowest, 100*highest))
	}
}

func (p *proposing) byTriads(out *Proposed, groups []string) {
	for _, t := range p.out.Triads {
		if t.Together() && slices.Contains(groups, t.Accel) && slices.Contains(groups, t.Gyro) {
			out.Evidence = append(out.Evidence, fmt.Sprintf("%s and %s turn together: the gyroscope explains %.0f %% of the turning of gravity", t.Accel, t.Gyro, 100*t.Explained))
		}
	}
}

func (p *proposing) byData(out *Proposed) {
	from := p.merged[out.Name]
	if len(from) < 2 {
		return
	}
	lowest, p0 := 1.0, 0.0
	for _, q := range p.out.Candidate.Pooled.Pairs {
		if slices.Contains(from, q.A) && slices.Contains(from, q.B) {
			lowest, p0 = min(lowest, q.Rho), max(p0, q.P)
		}
	}
	out.From = append(out.From, Data)
	out.Evidence = append(out.Evidence, fmt.Sprintf("%s share their timing: ρ %.2f or more, p %.3f or less", strings.Join(from, ", "), lowest, p0))
}

// compareTriads notes accelerometers that turn with the gyroscope of another
// limb, before limbs are joined: sensors of both arms on one limb tie it to the
// other.
func (p *proposing) compareTriads() {
	limb := make(map[string]string)
	for _, g := range p.layout.Groups {
		limb[g.Name] = g.Limb
	}
	best := make(map[string]Triad)
	for _, t := range p.out.Triads {
		if b, ok := best[t.Accel]; !ok || t.Explained > b.Explained {
			best[t.Accel] = t
		}
	}
	for _, g := range p.layout.Groups {
		if t, ok := best[g.Name]; ok && t.Together() && limb[t.Accel] != limb[t.Gyro] {
			p.note("%s turns with %s, which is on another limb, %s: are the columns named right?", t.Accel, t.Gyro, limb[t.Gyro])
		}
	}
}
