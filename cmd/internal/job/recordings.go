package job

import (
	"errors"
	"io"
	"strings"

	"strandwise/channels"
	"strandwise/channels/group"
	"strandwise/ingest"
)

// What is done about takes that cannot be grown: nothing but refuse them, or
// pass them on as they are recorded, unlabelled or with values missing.
const (
	strict  = false
	lenient = true
)

// open resolves the plan's recordings. The caller closes them.
func (p *Plan) open(in io.Reader, lenient bool) (*ingest.Recordings, error) {
	units, err := p.units()
	if err != nil {
		return nil, err
	}
	groups, err := p.groups()
	if err != nil {
		return nil, err
	}
	repair, err := p.repairs()
	if err != nil {
		return nil, err
	}
	if len(p.Recordings) == 0 {
		return nil, p.fault("recordings", "no recordings; name files or folders, or give a plan with --plan")
	}
	r, err := ingest.Open(ingest.Options{
		Paths: p.Recordings, Pattern: p.Pattern, Label: p.Label, Columns: p.Columns,
		Rate: p.Rate, TimeUnit: p.TimeUnit, Units: units, Groups: groups, LeaveOut: p.LeaveOut,
		LengthUnit: p.LengthUnit, Signals: p.Signals, Repair: repair, Cut: ingest.Cut(p.Cut), Annotations: p.Annotations, Stdin: in,
		Lenient: lenient,
	})
	return r, p.asUsage(err)
}

// asUsage turns a usage error of ingest into one of the plan, placed at the
// key it is about.
func (p *Plan) asUsage(err error) error {
	var usage *ingest.UsageError
	if !errors.As(err, &usage) {
		return err
	}
	if usage.Key == "" {
		return &UsageError{Problem: usage.Error()}
	}
	return p.fault(usage.Key, "%s", usage.Error())
}

// repairs reads the keys that say what may be repaired.
func (p *Plan) repairs() (ingest.Repair, error) {
	r := ingest.Repair{Rate: p.ToRate, LongestGap: p.LongestGap}
	kinds := map[string]*bool{"clock": &r.Clock, "order": &r.Order, "duplicates": &r.Merge, "split": &r.Split}
	for _, name := range p.Repair {
		switch kind, ok := kinds[name]; {
		case name == "all":
			r.Clock, r.Order, r.Merge, r.Split = true, true, true, true
		case ok:
			*kind = true
		default:
			return r, p.fault("repair", "unknown repair %q; legal repairs are clock, order, duplicates, split and all", name)
		}
	}
	switch p.Interpolate {
	case "linear":
	case "cubic":
		r.Cubic = true
	default:
		return r, p.fault("interpolate", "unknown interpolation %q; legal are linear and cubic", p.Interpolate)
	}
	if !(p.ToRate >= 0 && p.ToRate < 1e6) {
		return r, p.fault("to_rate", "%g is no frame rate", p.ToRate)
	}
	if p.LongestGap < 0 {
		return r, p.fault("longest_gap", "%d is impossible; it must be 0 or more", p.LongestGap)
	}
	if p.LongestGap == 0 {
		r.LongestGap = -1 // none
	}
	return r, nil
}

// units reads the plan's unit rules, each CHANNELS=UNIT.
func (p *Plan) units() ([]ingest.UnitRule, error) {
	var out []ingest.UnitRule
	for _, rule := range p.Unit {
		pattern, symbol, ok := strings.Cut(rule, "=")
		if !ok {
			return nil, p.fault("unit", "%q is not CHANNELS=UNIT, such as c0-c2=g", rule)
		}
		unit, err := channels.ParseUnit(symbol)
		if err != nil {
			return nil, p.fault("unit", "%v", err)
		}
		out = append(out, ingest.UnitRule{Pattern: strings.TrimSpace(pattern), Unit: unit})
	}
	return out, nil
}

// groups reads the plan's group rules, each NAME=CHANNELS or
// NAME@LIMB=CHANNELS.
func (p *Plan) groups() ([]group.Rule, error) {
	var out []group.Rule
	for _, text := range p.Group {
		rule, err := group.ParseRule(text)
		if err != nil {
			return nil, p.fault("group", "%v", err)
		}
		out = append(out, rule)
	}
	return out, nil
}
