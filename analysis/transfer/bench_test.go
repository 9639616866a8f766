package transfer

import (
	"testing"
	"time"
)

// loopGain stands for a second-order plant with a type-3 network: four zeros, five poles, one of them at the origin.
func loopGain() Function {
	return Function{Gain: 500, Integrators: 1,
		Zeros: []complex128{-5e3, -6e3, -2.7e5, 2.6e5},
		Poles: []complex128{complex(-1000, 5000), complex(-1000, -5000), -1e6, -2e6}}
}

func BenchmarkAt(b *testing.B) {
	f := loopGain()
	w := 1e4
	b.ReportAllocs()
	for b.Loop() {
		sink = f.At(w)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/floor(), "x-floor")
}

func BenchmarkFloor(b *testing.B) {
	w := 1e4
	for b.Loop() {
		sink = bare(w)
	}
}

var sink complex128

// floor measures the bare arithmetic in ns.
func floor() float64 {
	const n = 1 << 20
	start := time.Now()
	for i := range n {
		sink = bare(1e4 + float64(i&1))
	}
	return float64(time.Since(start).Nanoseconds()) / n
}

// bare is the same loop gain written out by hand.
//
//go:noinline
func bare(w float64) complex128 {
	u := w / 5099.0195135927845
	num := complex(1, w/5e3) * complex(1, w/6e3) * complex(1, w/2.7e5) * complex(1, -w/2.6e5)
	den := complex(1-u*u, 2*u*1000/5099.0195135927845) * complex(1, w/1e6) * complex(1, w/2e6) * complex(0, w)
	return 500 * num / den
}
