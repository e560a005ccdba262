package export

import (
	"encoding/json"
	"fmt"

	"github.com/parquet-go/parquet-go"

	"strandwise/channels"
)

// windowContent gathers what is needed to tell how many windows a set must have.
type windowContent struct {
	layout  *WindowsLayout
	lengths map[channels.Split]map[int]int64 // takes by split and number of frames
}

// take counts a take in.
func (c *windowContent) take(split channels.Split, frames int) {
	if c.lengths == nil {
		c.lengths = map[channels.Split]map[int]int64{}
	}
	if c.lengths[split] == nil {
		c.lengths[split] = map[int]int64{}
	}
	c.lengths[split][frames]++
}

// file reads how a file says its windows were cut, which is the same in all.
func (c *windowContent) file(p *parquet.File) error {
	w, err := windowsLayout(p)
	if err != nil {
		return err
	}
	if c.layout == nil {
		c.layout = w
	}
	if o := c.layout; w.Length != o.Length || w.Hop != o.Hop || w.Padding != o.Padding {
		return fmt.Errorf("its windows of %d frames every %d are not those of other files, of %d every %d", w.Length, w.Hop, o.Length, o.Hop)
	}
	return nil
}

// windowsLayout reads what a file of the table windows says of itself.
func windowsLayout(p *parquet.File) (*WindowsLayout, error) {
	text, _ := p.Lookup(WindowsKey)
	var w WindowsLayout
	if err := json.Unmarshal([]byte(text), &w); err != nil {
		return nil, fmt.Errorf("metadata %s: %w", WindowsKey, err)
	}
	if w.Length < 1 || w.Hop < 1 {
		return nil, fmt.Errorf("metadata %s: windows of %d frames every %d", WindowsKey, w.Length, w.Hop)
	}
	return &w, nil
}

// rows returns the windows that the takes of a split make.
func (c *windowContent) rows(split channels.Split) int64 {
	w := Windowing{Length: c.layout.Length, Hop: c.layout.Hop, Padding: c.layout.Padding}
	var n int64
	for frames, takes := range c.lengths[split] {
		n += takes * int64(w.Count(frames))
	}
	return n
}

// compareWindows holds the rows of the table windows against what the takes make.
func (c *content) compareWindows(v *Verification) {
	if c.windows.layout == nil {
		return
	}
	for _, split := range []channels.Split{channels.Train, channels.Test} {
		if rows, want := c.rows[tableKey{Windows, split}], c.windows.rows(split); rows != want {
			v.problem(manifestName, "split %s has takes of %d windows and %d rows in the table windows", split, want, rows)
		}
	}
}
