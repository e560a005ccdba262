package export

// Extent is how much of one split a set will hold.
type Extent struct{ Takes, Frames int64 }

// takeBytes is what a row of the table takes needs beside its lists: the
// identity, and for a synthetic take its parameters as text.
const takeBytes = 512

// Estimate returns the bytes that the Parquet files of these splits will have,
// in all and in the largest table of a split, for takes of so many channels. It
// counts numbers as they are before compression, so that the files are rather
// smaller.
func (o Options) Estimate(width int, splits ...Extent) (total, largest int64) {
	o, err := o.withDefaults()
	if err == nil {
		o.Windowing, err = o.Windowing.withDefaults(width)
	}
	if err != nil {
		return 0, 0 // Create will say why
	}
	for _, s := range splits {
		for _, table := range o.Tables {
			bytes := o.tableBytes(table, int64(width), s)
			total, largest = total+bytes, max(largest, bytes)
		}
	}
	return total, largest
}

func (o Options) tableBytes(table Table, width int64, s Extent) int64 {
	switch table {
	case Frames:
		return s.Frames * (4 + 8 + 4*width)
	case Windows:
		rows := s.Frames/int64(o.Windowing.Hop) + s.Takes
		return rows * (16 + 4*width*int64(o.Windowing.Length))
	}
	return s.Takes*takeBytes + s.Frames*4*(1+width)
}
