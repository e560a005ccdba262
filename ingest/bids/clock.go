package bids

import (
	"fmt"
	"slices"
)

// setTime gives a take the latencies for its clock, or without them the rate,
// where 0 says that it is not known yet.
func (m *motion) setTime(stated metadata, rate float64) (err error) {
	switch {
	case m.clock == nil:
	case m.timeless == 0:
		return nil
	case m.timeless < len(m.take.Time):
		return m.fault(m.firstTimeless, m.clock.name, "has no latency, unlike other rows", "fill the gap, or remove the row")
	default:
		m.in.Notice("has a channel of latencies without values; the sampling frequency is the clock", m.clock.name)
		if rate, err = m.rate(stated, m.channels); err != nil {
			return err
		}
	}
	for i := range m.take.Time {
		m.take.Time[i] = float64(i) / rate
	}
	return nil
}

// rate returns how many rows a recording has per second.
func (c *recording) rate(stated metadata, list []channel) (float64, error) {
	if stated == nil {
		return 0, c.lacks("motion", ".json", "at which SamplingFrequency it was recorded")
	}
	nominal, err := stated.frequency("SamplingFrequency")
	if err != nil {
		return 0, err
	}
	effective, err := stated.frequency("SamplingFrequencyEffective")
	switch {
	case err != nil:
		return 0, err
	case nominal == 0 && effective == 0:
		return c.sharedRate(list)
	case effective == 0:
		effective = nominal
	case nominal != 0 && effective != nominal:
		c.in.Notice("states an effective sampling frequency, which is the clock, beside the nominal one", fmt.Sprintf("%g Hz, not %g Hz", effective, nominal))
	}
	other := func(ch channel) bool { return ch.rate != 0 && ch.rate != nominal && ch.rate != effective }
	if i := slices.IndexFunc(list, other); i >= 0 {
		c.in.Notice("has channels with a sampling frequency of their own, which is not used: every row is one period after the one above",
			fmt.Sprintf("%s has %g Hz, the recording %g Hz", list[i].name, list[i].rate, effective))
	}
	return effective, nil
}

// sharedRate returns the sampling frequency that all channels but latencies
// have.
func (c *recording) sharedRate(list []channel) (float64, error) {
	rate := 0.0
	for _, ch := range list {
		if ch.kind == "LATENCY" {
			continue
		}
		if ch.rate == 0 || rate != 0 && ch.rate != rate {
			e := c.fault(0, "", "states no SamplingFrequency, and its channels do not share one", "add the key SamplingFrequency, in Hz, and its value")
			e.File = c.wanted("motion", ".json")
			return 0, e
		}
		rate = ch.rate
	}
	return rate, nil
}
