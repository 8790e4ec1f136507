package kernel

import (
	"fmt"
	"testing"
	"time"
)

// race runs contestants in turn, so that they share whatever else the machine does, and reports
// the millions a second of each, and the ratios to the first.
func race(b *testing.B, work float64, names []string, contestants ...func()) {
	spent := make([]time.Duration, len(contestants))
	for b.Loop() {
		for i, run := range contestants {
			start := time.Now()
			run()
			spent[i] += time.Since(start)
		}
	}
	for i, name := range names {
		b.ReportMetric(work*float64(b.N)/spent[i].Seconds()/1e6, "M/s-"+name)
		if i > 0 {
			b.ReportMetric(spent[0].Seconds()/spent[i].Seconds(), "x-"+name)
		}
	}
}

// BenchmarkTransform is window and transform of 64 channels, the first 78 of 100 lines kept: millions of
// channel samples a second.
func BenchmarkTransform(b *testing.B) {
	for _, n := range []int{512, 1024, 2048, 3375, 4096, 4800, 5400, 8192, 16384, 65536} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			const count = 64
			window, channels := noise(n, 1), noises(count, n, 2)
			dst := make([]complex128, n/2*78/100*count)
			contestant := func(t *Transform) func() {
				return func() {
					for first := 0; first < count; first += Lanes {
						t.ChannelsTo(dst, first, count, channels[first:][:Lanes])
					}
				}
			}
			gonums := &Transform{window: window, other: newOther(window)}
			race(b, float64(n*count), []string{"gonum", "plain", "fast"},
				contestant(gonums), contestant(newTransform(window, &plain)), contestant(newTransform(window, fastest)))
		})
	}
}

// BenchmarkSums is the sums of products of 1601 lines of 4 blocks: millions of channel samples a
// second, of blocks of 4096 samples.
func BenchmarkSums(b *testing.B) {
	for _, size := range []struct{ q, p int }{{1, 1}, {2, 6}, {3, 60}, {4, 60}, {8, 504}} {
		b.Run(fmt.Sprintf("%dx%d", size.q, size.p), func(b *testing.B) {
			const lines, blocks = 1601, 4
			q, p := size.q, size.p
			block := make([][]complex128, blocks)
			for i := range block {
				block[i] = complexNoise(lines*(q+p), uint64(i))
			}
			gxx, gyx, gyy := make([]complex128, lines*q*q), make([]complex128, lines*p*q), make([]float64, lines*p)
			contestant := func(l *loops) func() {
				return func() {
					for k := range lines {
						for _, lines := range block {
							x, y := lines[k*(q+p):][:q], lines[k*(q+p)+q:][:p]
							l.outer(gxx[k*q*q:][:q*q], x, x)
							l.outer(gyx[k*p*q:][:p*q], y, x)
							l.power(gyy[k*p:][:p], y)
						}
					}
				}
			}
			race(b, 4096*blocks*float64(q+p), []string{"plain", "fast"}, contestant(&plain), contestant(fastest))
		})
	}
}

// BenchmarkMisfits is the misfits of 801 lines of a block and a logarithm of the product of each four: millions of
// products of a matrix a second.
func BenchmarkMisfits(b *testing.B) {
	for _, size := range []struct{ q, p int }{{1, 3}, {2, 14}, {4, 60}, {8, 504}} {
		b.Run(fmt.Sprintf("%dx%d", size.q, size.p), func(b *testing.B) {
			const lines = 801
			q, p := size.q, size.p
			m := NewMatrices(lines, p, q)
			block := complexNoise(lines*(q+p), 1)
			weights, products := make([]float32, Whole(p)), make([]float64, Whole(p))
			contestant := func(l *loops) func() {
				return func() {
					for k := range lines {
						if k%4 == 0 {
							for o := range products {
								products[o] = 1
							}
						}
						x, y := block[k*(q+p):][:q], block[k*(q+p)+q:][:p]
						l.misfit(products, y, x, m.values[k*m.size():][:m.size()], weights, 1, 1e18)
						if k%4 == 3 {
							l.logarithms(products)
						}
					}
				}
			}
			race(b, lines*float64(q*p), []string{"plain", "fast"}, contestant(&plain), contestant(fastest))
		})
	}
}
