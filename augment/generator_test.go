package augment_test

import (
	"testing"

	"pgregory.net/rapid"

	"strandwise/augment"
)

// key is everything a generator is keyed by.
type key struct {
	seed  uint64
	take  string
	draw  int
	group string
}

func (k key) numbers() [4]uint64 {
	rng := augment.Generator(k.seed, k.take, k.draw, k.group)
	return [4]uint64{rng.Uint64(), rng.Uint64(), rng.Uint64(), rng.Uint64()}
}

// The numbers are part of what makes a run repeatable: another machine or a
// later version must draw the same.
func TestGeneratorKnownNumbers(t *testing.T) {
	// Computed by a separate program from the definitions of SHA-256 (FIPS
	// 180-4) and of PCG-DXSM with a 128-bit state (O'Neill, 2014 and 2019).
	for k, want := range map[key][3]uint64{
		{1, "a", 0, ""}:                    {0x15050906212d8e44, 0xa590fb413c95237d, 0x6752cf670abe2a83},
		{7, "left wave 3", 12, "left_arm"}: {0x5c0498c5f1b49aba, 0x193167e0c13d30d1, 0x8bc23b617fa48f49},
	} {
		if got := k.numbers(); [3]uint64(got[:3]) != want {
			t.Errorf("%+v: %#x, want %#x", k, got[:3], want)
		}
	}
}

func TestGeneratorTellsKeysApart(t *testing.T) {
	base := key{1, "ab", 2, "cd"}
	for _, other := range []key{
		{2, "ab", 2, "cd"},
		{1, "ba", 2, "cd"},
		{1, "ab", 3, "cd"},
		{1, "ab", 2, "dc"},
		{2, "ab", 1, "cd"},     // seed and draw exchanged
		{1, "a", 2, "bcd"},     // the same letters, parted elsewhere
		{1, "abc", 2, "d"},     //
		{1, "abcd", 2, ""},     //
		{1, "", 2, "abcd"},     //
		{1, "ab", 2, "cd\x00"}, // a zero byte more
		{1, "ab", -2, "cd"},
	} {
		if base.numbers() == other.numbers() {
			t.Errorf("%+v and %+v give the same numbers", base, other)
		}
	}
}

func TestGeneratorDependsOnKeyAlone(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draw := rapid.Custom(func(t *rapid.T) key {
			name := rapid.StringOfN(rapid.RuneFrom([]rune("ab\x00")), 0, 4, -1)
			return key{rapid.Uint64Max(2).Draw(t, "seed"), name.Draw(t, "take"), rapid.IntRange(0, 2).Draw(t, "draw"), name.Draw(t, "group")}
		})
		a, b := draw.Draw(t, "a"), draw.Draw(t, "b")
		if (a == b) != (a.numbers() == b.numbers()) {
			t.Fatalf("%+v and %+v", a, b)
		}
	})
}
