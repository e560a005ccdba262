package lognormal_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"strandwise/augment/lognormal"
	"strandwise/testdata/opendata"
)

// path is one tracked point of a take.
type path struct {
	values, time []float64
	width        int
}

// points reads the listed channels of every take of an open set as paths, at
// the given rate in frames per second.
func points(b *testing.B, set string, rate float64, lists ...[]int) []path {
	var out []path
	for _, take := range opendata.Set(b, set) {
		for _, list := range lists {
			p := path{width: len(list)}
			for i := range take.Frames() {
				p.time = append(p.time, float64(i)/rate)
				for _, c := range list {
					p.values = append(p.values, take.Frame(i)[c])
				}
			}
			out = append(out, p)
		}
	}
	return out
}

// How well and how fast strokes are found in the open recordings: the median
// signal-to-noise ratio, the share under 15 dB, the median number of strokes
// and the time per path. Rates are near those of the recordings; they set the
// unit of time only.
//
//	go test ./augment/lognormal -run '^$' -bench Extract -benchtime 1x
func BenchmarkExtract(b *testing.B) {
	for _, set := range []struct {
		name, from string
		rate       float64
		lists      [][]int
	}{
		{"Libras", "Libras", 6.4, [][]int{{0, 1}}},
		{"NATOPS-hands", "NATOPS", 20, [][]int{{0, 1, 2}, {3, 4, 5}}},
		{"UWave-315-frames", "UWaveGestureLibrary", 100, [][]int{{0, 1, 2}}},
	} {
		b.Run(set.name, func(b *testing.B) {
			all := points(b, set.from, set.rate, set.lists...)
			for b.Loop() {
				measure(b, all)
			}
			b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N*len(all)), "ms/path")
		})
	}
}

func measure(b *testing.B, all []path) {
	var snr, strokes []float64
	refused := 0.0
	for _, p := range all {
		m, err := lognormal.Extract(p.values, p.width, p.time, lognormal.Default())
		var poor *lognormal.PoorFitError
		switch {
		case errors.As(err, &poor):
			refused++
			snr = append(snr, poor.SNR)
		case err != nil:
			b.Fatal(err)
		default:
			snr, strokes = append(snr, m.SNR), append(strokes, float64(len(m.Strokes)))
		}
	}
	slices.Sort(snr)
	slices.Sort(strokes)
	for name, at := range map[string]float64{"dB-p05": 0.05, "dB-p25": 0.25, "dB-p50": 0.5, "dB-p75": 0.75} {
		b.ReportMetric(snr[int(at*float64(len(snr)))], name)
	}
	b.ReportMetric(100*refused/float64(len(all)), "%refused")
	b.ReportMetric(strokes[len(strokes)/2], "strokes")
}

// The same on movements the model made itself, over many seeds: the least
// signal-to-noise ratio and the median.
//
//	go test ./augment/lognormal -run '^$' -bench OwnStrokes -benchtime 1x
func BenchmarkOwnStrokes(b *testing.B) {
	for width, name := range []string{1: "line", 2: "plane", 3: "space"} {
		if width == 0 {
			continue
		}
		b.Run(name, func(b *testing.B) {
			const seeds = 1000
			for b.Loop() {
				var snr []float64
				for seed := range uint64(seeds) {
					planted, clock := drawModel(width, rand.New(rand.NewPCG(seed, 1000)))
					m, err := lognormal.Extract(planted.Path(nil, clock), width, clock, lognormal.Options{Floor: math.Inf(-1), Target: 30})
					if err != nil {
						b.Fatal(err)
					}
					snr = append(snr, m.SNR)
				}
				slices.Sort(snr)
				b.ReportMetric(snr[0], "dB-least")
				b.ReportMetric(snr[seeds/100], "dB-p01")
				b.ReportMetric(snr[seeds/2], "dB-p50")
			}
			b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N*seeds), "ms/path")
		})
	}
}
