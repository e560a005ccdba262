package table_test

import (
	"strings"
	"testing"

	"strandwise/ingest/raw"
	"strandwise/ingest/table"
)

// TestFinishInfersTheUnit shows the evidence for the unit of a clock that does
// not state one, and the clocks for which there is none.
func TestFinishInfersTheUnit(t *testing.T) {
	every := func(step float64) []float64 { return []float64{0, step, 2 * step, 3*step + step/10} }
	for _, c := range []struct {
		name  string
		first float64
		times []float64
		unit  string
		says  string // the evidence, or the fault
	}{
		{"s", 0, every(0.02), "s", "its median step of 0.02 makes that 50 frames per second"},
		{"ms", 0, every(10), "ms", "its median step of 10 makes that 100 frames per second"},
		{"us", 0, every(20000), "us", "its median step of 20000 makes that 50 frames per second"},
		{"ns", 0, every(5e6), "ns", "its median step of 5e+06 makes that 200 frames per second"},
		{"a slow log since 1970", 1.7e12, every(300), "ms", "as such its first value lies in November 2023"}, // 1.7e9 s is 14 November 2023, 22:13:20 UTC
		{"frames or ms", 0, []float64{1, 2, 3}, "", "counts 1, 2, 3: that may be milliseconds or frames"},
		{"nothing fits", 0, every(300), "", "has a median step of 300, which fits no unit: no frame rate of 5 to 2000 per second"},
	} {
		k := table.Clock{Name: "time"}
		take, said := &raw.Take{}, ""
		for i, v := range c.times {
			take.Time = append(take.Time, k.Number(c.first+v, i == 0))
		}
		err := k.Finish(take, take.Time, raw.Input{Name: "log", Notice: func(text, evidence string) { said += text + evidence }})
		if err != nil {
			said += err.Error()
		}
		if k.Unit != c.unit || (err != nil) != (c.unit == "") || !strings.Contains(said, c.says) {
			t.Errorf("%s: unit %q, error %v, and it says %q", c.name, k.Unit, err, said)
		}
	}
}

// A clock far from zero loses no digit between the values of a take, and tells
// when the take began.
func TestClockFarFromZero(t *testing.T) {
	k := table.Clock{Name: "time", Unit: "ns"}
	take := &raw.Take{}
	for i, v := range []int64{1700000000000000001, 1700000000010000002, 1700000000020000003} {
		take.Time = append(take.Time, k.Whole(v, i == 0))
	}
	if err := k.Finish(take, take.Time, raw.Input{Notice: func(string, string) {}}); err != nil {
		t.Fatal(err)
	}
	if take.Time[0] != 0 || take.Time[2]-take.Time[1] != 0.020000002-0.010000001 || take.Origin < 1.7e9 || take.Origin > 1.7e9+1 {
		t.Errorf("times %v from %v", take.Time, take.Origin)
	}
}
