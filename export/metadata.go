package export

import (
	"encoding/json"
	"math"

	"strandwise/channels"
	"strandwise/export/pages"
)

// LayoutKey is the key of [FileLayout] in the metadata of every Parquet file.
const LayoutKey = "strandwise.layout"

// layoutFormat names the form of FileLayout and Layout.
const layoutFormat = "strandwise.layout/1"

// FileLayout is what the metadata of a Parquet file say about it, as JSON
// under [LayoutKey].
type FileLayout struct {
	Format         string   `json:"format"` // "strandwise.layout/1"
	ProgramVersion string   `json:"program_version"`
	Table          Table    `json:"table"`
	RateHz         *float64 `json:"rate_hz"` // the frame rate of every take in the file; null when they differ
	Layout
	Cautions []string `json:"cautions"`
}

// Layout describes the channels and groups of a set.
type Layout struct {
	Channels []Channel `json:"channels"`
	Groups   []Group   `json:"groups"`
}

// Channel describes one channel and the column it stands in.
type Channel struct {
	Name         string            `json:"name"`
	Column       string            `json:"column"`
	TrackedPoint string            `json:"tracked_point"` // empty when unknown
	Quantity     channels.Quantity `json:"quantity"`
	Component    string            `json:"component"` // empty when unknown
	Unit         string            `json:"unit"`      // SI symbol; empty when unknown
}

// Group lists the channels that form one trajectory.
type Group struct {
	Name     string   `json:"name"`
	Limb     string   `json:"limb"`
	Channels []string `json:"channels"` // by name
}

// describeLayout returns the layout as the manifest and the files state it.
func describeLayout(l *channels.Layout) Layout {
	out := Layout{Channels: []Channel{}, Groups: []Group{}}
	for _, c := range l.Channels {
		out.Channels = append(out.Channels, Channel{
			Name: c.Name, Column: columnName(c.Name), TrackedPoint: c.TrackedPoint,
			Quantity: c.Quantity, Component: c.Component, Unit: c.Unit,
		})
	}
	for _, g := range l.Groups {
		group := Group{Name: g.Name, Limb: g.Limb, Channels: []string{}}
		for _, c := range g.Channels {
			group.Channels = append(group.Channels, l.Channels[c].Name)
		}
		out.Groups = append(out.Groups, group)
	}
	return out
}

// withChannels appends one column per channel to a table's own columns.
func withChannels(columns []pages.Column, l *channels.Layout, kind pages.Kind) []pages.Column {
	for _, c := range l.Channels {
		columns = append(columns, pages.Column{Name: columnName(c.Name), Kind: kind})
	}
	return columns
}

// commonRate finds out whether takes share one frame rate. Rates count as one
// when they agree to six decimals: clocks in seconds are rounded numbers.
type commonRate struct {
	hz     float64
	takes  int
	differ bool
}

func (r *commonRate) take(hz float64) {
	hz = math.Round(hz*1e6) / 1e6
	r.differ = r.differ || (r.takes > 0 && hz != r.hz)
	r.hz = hz
	r.takes++
}

// value returns the shared rate, or nil.
func (r *commonRate) value() *float64 {
	if r.differ || r.takes == 0 || r.hz == 0 {
		return nil
	}
	return &r.hz
}

// marshal encodes v as JSON in the order of its fields, without escaping what
// only HTML minds, and without a final line end.
func marshal(v any, indent string) ([]byte, error) {
	var b jsonBuffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", indent)
	if err := e.Encode(v); err != nil {
		return nil, err
	}
	return b[:len(b)-1], nil
}

type jsonBuffer []byte

func (b *jsonBuffer) Write(p []byte) (int, error) { *b = append(*b, p...); return len(p), nil }
