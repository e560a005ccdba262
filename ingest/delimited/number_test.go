package delimited

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

// checkNumber holds one number against strconv.
func checkNumber(t *testing.T, text string) {
	t.Helper()
	want, err := strconv.ParseFloat(text, 64)
	var got [1]float64
	end := values(got[:], []byte(text+"\n"), 0, ',', '.')
	switch {
	case err != nil:
		if end == len(text) {
			t.Errorf("%q read as %v; strconv: %v", text, got[0], err)
		}
	case end != len(text):
		t.Errorf("%q refused; strconv reads %v", text, want)
	case math.Float64bits(got[0]) != math.Float64bits(want):
		t.Errorf("%q read as %v (%x), want %v (%x)", text, got[0], math.Float64bits(got[0]), want, math.Float64bits(want))
	}
}

func TestNumbersOfNote(t *testing.T) {
	for _, text := range []string{
		"0", "-0", "+0", "0.0", "-0.000", "1", "-1", "+1.5", ".5", "-.5", "5.", "00012", "1e5", "1E-5", "1e+5", "1.e1",
		"9007199254740991", "9007199254740992", "9007199254740993", "9007199254740993.0", // 2^53 and around
		"9999999999999999999", "0.9999999999999999999", "18446744073709551615", "18446744073709551616",
		"1e22", "1e23", "123e20", "1e-22", "1e-23", "9007199254740993e-19", "1.7976931348623157e308", "1e309", "-1e309",
		"4.9e-324", "2.4703282292062327e-324", "2.2250738585072011e-308", "1e-999999999999", "1e999999999999",
		"0." + strings.Repeat("0", 400) + "1", strings.Repeat("1", 400), "1" + strings.Repeat("0", 300) + "." + strings.Repeat("9", 30),
		"0.500000000000000166533453693773481063544750213623046875", // half way between two float64, with a long tail
		"", "-", "+", ".", "-.", "e5", "1e", "1e+", "1e-", "--1", "1.2.3", "1,2", "0x1.8", "abc",
	} {
		checkNumber(t, text)
	}
}

// TestNumbersLikeStrconv reads two million invented numbers in the ways
// loggers write them.
func TestNumbersLikeStrconv(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for range 200_000 {
		v := rng.NormFloat64() * math.Pow(10, float64(rng.IntN(12)-6))
		whatever := math.Float64frombits(rng.Uint64())
		for _, text := range []string{
			strconv.FormatFloat(v, 'f', rng.IntN(12), 64),
			strconv.FormatFloat(v, 'g', -1, 64),
			strconv.FormatFloat(v, 'f', -1, 64),
			strconv.FormatFloat(v, 'e', rng.IntN(20), 64),
			strconv.FormatFloat(v, 'f', rng.IntN(40), 64),
			strconv.FormatFloat(float64(float32(v)), 'f', -1, 32),
			fmt.Sprintf("%d.%018d", rng.IntN(10), rng.Uint64N(1e18)),
			fmt.Sprintf("%de%d", rng.Uint64(), rng.IntN(60)-30),
			fmt.Sprintf("%d", rng.Int64()),
		} {
			checkNumber(t, text)
		}
		if !math.IsNaN(whatever) && !math.IsInf(whatever, 0) {
			checkNumber(t, strconv.FormatFloat(whatever, 'g', -1, 64))
		}
	}
}

// TestQuotientTies holds the integer division against strconv where the exact
// quotient lies half way between two values, or next to it.
func TestQuotientTies(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 2))
	for range 100_000 {
		k := 1 + rng.IntN(10)
		half := rng.Uint64N(1<<52)<<1 | 1<<53 | 1 // 54 bits, odd: a tie
		m := half
		for range k { // half/2^k times 10^k is an integer: half times 5^k
			if m > math.MaxUint64/5 {
				m = 0
				break
			}
			m *= 5
		}
		for _, near := range []uint64{m - 1, m, m + 1} {
			s := fmt.Sprintf("%020d", near)
			if m > 1 && near < 1e19 {
				checkNumber(t, s[1:20-k]+"."+s[20-k:])
			}
		}
	}
}

func TestReadingOfFields(t *testing.T) {
	for text, want := range map[string]reading{
		" 1.5 ": isNumber, "1,5": isText, "1e400": isInfinite, "-1e400": isInfinite, "": isMissing, "  ": isMissing, "-": isMissing,
		"NaN": isMissing, "-nan": isMissing, "NA": isMissing, "null": isMissing, "Inf": isInfinite, "-Infinity": isInfinite,
		"0x10": isText, "1_000": isText, "wave": isText, "1 2": isText, "é": isText, "1.2.3": isText, "Infinit": isText,
	} {
		if _, got := read([]byte(text), '.'); got != want {
			t.Errorf("%q reads as %d, want %d", text, got, want)
		}
	}
	if v, how := read([]byte("-1,25"), ','); v != -1.25 || how != isNumber {
		t.Errorf("decimal comma: %v, %d", v, how)
	}
	if v, how := read([]byte("0,12345678901234567890123"), ','); v != 0.12345678901234567890123 || how != isNumber {
		t.Errorf("long decimal comma: %v, %d", v, how)
	}
	for _, text := range []string{"1.25", "1.234,5", "1e400.5"} {
		if _, how := read([]byte(text), ','); how != isText {
			t.Errorf("%q with decimal comma reads as %d", text, how)
		}
	}
}

func FuzzNumber(f *testing.F) {
	for _, s := range []string{"0", "-1.5", "1e22", "9007199254740993", "123456789012345.67890", "1e-400", ".e", "1e309"} {
		f.Add(s)
	}
	// Whatever text is accepted as a number has the value strconv gives it;
	// decimal text that strconv reads is never refused.
	f.Fuzz(func(t *testing.T, text string) {
		if strings.ContainsAny(text, "\n") || strings.HasPrefix(text, " ") {
			return
		}
		var got [1]float64
		end := values(got[:], []byte(text+"\n"), 0, ',', '.')
		want, err := strconv.ParseFloat(text, 64)
		if end == len(text) && (err != nil || math.Float64bits(want) != math.Float64bits(got[0])) {
			t.Errorf("%q read as %v; strconv: %v, %v", text, got[0], want, err)
		}
		if end != len(text) && err == nil && strings.Trim(text, "+-.eE0123456789") == "" {
			t.Errorf("%q refused; strconv reads %v", text, want)
		}
	})
}
