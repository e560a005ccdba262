package bvh

import (
	"fmt"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"strandwise/channels/body"
)

const (
	mostJoints   = 4096 // far beyond any body, and small enough for a file to stay small in memory
	mostChannels = 6    // of one joint
)

// channelNames are the words of the format for the freedoms of a joint, by
// their number.
var channelNames = [...]string{"Xposition", "Yposition", "Zposition", "Xrotation", "Yrotation", "Zrotation"}

// hierarchy reads the skeleton, with lengths as the file states them.
type hierarchy struct {
	*text
	joints []body.Joint
	named  map[string]int // line each name stands on
	ends   []int          // joints whose end sites await a name
	open   []opened
}

// opened is a joint whose closing brace is still to come.
type opened struct {
	joint    int
	line     int
	offset   bool // has been read
	channels bool
	children bool
}

// readHierarchy reads up to and including the word MOTION.
func readHierarchy(t *text) (*body.Skeleton, error) {
	h := &hierarchy{text: t, named: map[string]int{}}
	w, err := h.word()
	if err != nil {
		return nil, err
	}
	if !strings.EqualFold(w, "HIERARCHY") {
		return nil, h.fault("does not begin with the word HIERARCHY", "check that this is a BVH file")
	}
	for {
		w, err := h.word()
		if err != nil {
			return nil, err
		}
		if strings.EqualFold(w, "MOTION") && len(h.open) == 0 && len(h.joints) > 0 {
			h.nameEnds()
			return &body.Skeleton{Joints: h.joints}, h.lineEnd("MOTION")
		}
		if err := h.statement(w); err != nil {
			return nil, err
		}
	}
}

// statement reads one statement of the hierarchy from its first word on.
func (h *hierarchy) statement(w string) error {
	switch strings.ToUpper(w) {
	case "ROOT":
		return h.root()
	case "JOINT":
		return h.joint()
	case "END":
		return h.endSite()
	case "OFFSET":
		return h.offset()
	case "CHANNELS":
		return h.channels()
	case "}":
		return h.close()
	case "MOTION":
		if len(h.open) > 0 {
			return h.fault("MOTION begins inside joint "+h.name()+", which is not closed", "add the missing }")
		}
		return h.fault("has no ROOT joint", "export the file again")
	}
	return h.fault(quote(w)+" is not expected here", "legal words are ROOT, JOINT, End Site, OFFSET, CHANNELS, } and MOTION")
}

func (h *hierarchy) root() error {
	if len(h.open) > 0 {
		return h.fault("ROOT stands inside joint "+h.name(), "write JOINT, or close the joint with }")
	}
	return h.begin("ROOT", -1)
}

func (h *hierarchy) joint() error {
	if len(h.open) == 0 {
		return h.fault("JOINT stands outside any joint", "write ROOT, or remove a } before it")
	}
	return h.begin("JOINT", h.top().joint)
}

// begin opens a joint whose name follows.
func (h *hierarchy) begin(keyword string, parent int) error {
	name := h.rest()
	if name == "" {
		return h.fault(keyword+" has no name", "name the joint on the same line")
	}
	if line, ok := h.named[name]; ok {
		return h.fault(fmt.Sprintf("two joints are named %s, the first at line %d", name, line), "rename one of them")
	}
	h.named[name] = h.line
	return h.push(body.Joint{Name: name, Parent: parent, Freedoms: []body.Freedom{}})
}

// endSite opens an end site. Words after "End Site" name nothing and are not
// kept.
func (h *hierarchy) endSite() error {
	w, err := h.word()
	if err != nil {
		return err
	}
	if !strings.EqualFold(w, "Site") {
		return h.fault("End is followed by "+quote(w), "write End Site")
	}
	if len(h.open) == 0 {
		return h.fault("End Site stands outside any joint", "put it inside the joint it ends")
	}
	h.rest()
	h.ends = append(h.ends, len(h.joints))
	return h.push(body.Joint{Parent: h.top().joint, End: true})
}

// push opens a joint, whose brace follows.
func (h *hierarchy) push(j body.Joint) error {
	if len(h.open) > 0 {
		if h.joints[j.Parent].End {
			return h.fault("an end site has a joint in it", "write JOINT and a name instead of End Site")
		}
		h.top().children = true
	}
	if len(h.joints) == mostJoints {
		return h.fault(fmt.Sprintf("has more than %d joints", mostJoints), "check that this is a BVH file")
	}
	o := opened{joint: len(h.joints), line: h.line}
	h.joints = append(h.joints, j)
	h.open = append(h.open, o)
	w, err := h.word()
	if err != nil {
		return err
	}
	if w != "{" {
		return h.fault("joint "+h.name()+" is followed by "+quote(w), "add the missing {")
	}
	return nil
}

func (h *hierarchy) offset() error {
	if err := h.once("OFFSET", func(o *opened) *bool { return &o.offset }); err != nil {
		return err
	}
	var v [3]float64
	for i := range v {
		w, err := h.word()
		if err == nil {
			v[i], err = h.number(w)
		}
		if err != nil {
			return err
		}
	}
	h.joints[h.top().joint].Offset = r3.Vec{X: v[0], Y: v[1], Z: v[2]}
	return nil
}

func (h *hierarchy) channels() error {
	if err := h.once("CHANNELS", func(o *opened) *bool { return &o.channels }); err != nil {
		return err
	}
	j := &h.joints[h.top().joint]
	if j.End {
		return h.fault("an end site has CHANNELS", "write JOINT and a name instead of End Site")
	}
	w, err := h.word()
	if err != nil {
		return err
	}
	n, err := strconv.Atoi(w)
	if err != nil || n < 0 || n > mostChannels {
		return h.fault(fmt.Sprintf("joint %s states %s as its number of channels", j.Name, quote(w)), fmt.Sprintf("write a number from 0 to %d", mostChannels))
	}
	for range n {
		w, err := h.word()
		if err != nil {
			return err
		}
		f, err := h.freedom(w, j)
		if err != nil {
			return err
		}
		j.Freedoms = append(j.Freedoms, f)
	}
	return nil
}

// freedom reads the name of a channel of a joint.
func (h *hierarchy) freedom(w string, j *body.Joint) (body.Freedom, error) {
	for i, name := range channelNames {
		if !strings.EqualFold(w, name) {
			continue
		}
		f := body.Freedom(i)
		for _, before := range j.Freedoms {
			if before == f && !f.IsTurn() {
				return 0, h.fault(fmt.Sprintf("joint %s has the channel %s twice", j.Name, name), "correct the CHANNELS line")
			}
		}
		return f, nil
	}
	return 0, h.fault(fmt.Sprintf("joint %s has %s where a channel should stand", j.Name, quote(w)),
		"correct the number of channels or their names; legal names are "+strings.Join(channelNames[:], ", "))
}

// once checks that a statement may stand here, and marks it as read. It must
// come before the children, or the columns of the motion could not be told.
func (h *hierarchy) once(keyword string, flag func(*opened) *bool) error {
	if len(h.open) == 0 {
		return h.fault(keyword+" stands outside any joint", "put it inside the joint it belongs to")
	}
	o := h.top()
	if *flag(o) {
		return h.fault("joint "+h.name()+" has two "+keyword+" lines", "remove one of them")
	}
	if o.children {
		return h.fault(keyword+" of joint "+h.name()+" comes after its children", "put it before the first of them")
	}
	*flag(o) = true
	return nil
}

func (h *hierarchy) close() error {
	if len(h.open) == 0 {
		return h.fault("} closes no joint", "remove it")
	}
	if !h.top().offset {
		return h.fault("joint "+h.name()+" has no OFFSET", "add the line OFFSET x y z")
	}
	h.open = h.open[:len(h.open)-1]
	return nil
}

func (h *hierarchy) top() *opened { return &h.open[len(h.open)-1] }

// name returns the name of the joint at hand, for messages.
func (h *hierarchy) name() string {
	j := h.joints[h.top().joint]
	if j.End {
		return "End Site of " + h.joints[j.Parent].Name
	}
	return j.Name
}

// nameEnds names the end sites after their joints: Head_end, and Head_end2 for
// a second one or where the name is taken.
func (h *hierarchy) nameEnds() {
	for _, i := range h.ends {
		stem := h.joints[h.joints[i].Parent].Name + "_end"
		name := stem
		for n := 2; h.named[name] > 0; n++ {
			name = stem + strconv.Itoa(n)
		}
		h.named[name] = h.line
		h.joints[i].Name = name
	}
}

// lineEnd checks that nothing is left on the line.
func (h *hierarchy) lineEnd(after string) error {
	if len(h.words) > 0 {
		return h.fault(after+" is followed by "+quote(h.words[0]), "start a new line there")
	}
	return nil
}
