package loop

import (
	"math"
	"testing"
	"time"

	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

// typical is a second-order plant with a right-half-plane and an ESR zero under a type-3 network with a finite amplifier.
func typical() transfer.Product {
	return transfer.Product{Function: transfer.Function{
		Gain: 47.66 / 1.8 * 3.1e4 * 0.05, Poles: []complex128{complex(-1015.6, 4960.9), complex(-1015.6, -4960.9), -8.1e-3, -1.8e5, -1.2e5, -5.5e7},
		Zeros: []complex128{267115, -275482, -3258, -3629},
	}}
}

// floorAt is the bare arithmetic of typical's loop gain at one frequency, written out.
func floorAt(t *transfer.Product, w float64) complex128 {
	z, p := t.Zeros, t.Poles
	num := complex(t.Gain, 0) * complex(1, -w/real(z[0])) * complex(1, -w/real(z[1])) * complex(1, -w/real(z[2])) * complex(1, -w/real(z[3]))
	m := real(p[0])*real(p[0]) + imag(p[0])*imag(p[0])
	den := complex(1-w*w/m, -2*w*real(p[0])/m) * complex(1, -w/real(p[2])) * complex(1, -w/real(p[3])) * complex(1, -w/real(p[4])) * complex(1, -w/real(p[5]))
	h := real(den)*real(den) + imag(den)*imag(den)
	return num * complex(real(den)/h, -imag(den)/h)
}

// The goal (quality page): one evaluation within twice the bare arithmetic. form.at gives the slopes too.
func BenchmarkFloor(b *testing.B) {
	t := typical()
	var f form
	require.NoError(b, f.set(&t))
	var sink complex128
	run := func(name string, at func(w float64) complex128) {
		b.Run(name, func(b *testing.B) {
			w := 100.0
			for b.Loop() {
				w *= 1.0001
				sink += at(w)
			}
		})
	}
	run("inline", func(w float64) complex128 { return floorAt(&t, w) })
	run("Product.At", t.At)
	run("form.at", func(w float64) complex128 { h, _ := f.at(w, nil); return h })
	b.Run("x-floor", func(b *testing.B) {
		at := map[string]func(w float64) complex128{"floor": func(w float64) complex128 { return floorAt(&t, w) }, "Product.At": t.At,
			"form.at": func(w float64) complex128 { h, _ := f.at(w, nil); return h }}
		best := map[string]time.Duration{"floor": math.MaxInt64, "Product.At": math.MaxInt64, "form.at": math.MaxInt64}
		for b.Loop() { // the best of interleaved rounds: the machine may be busy
			for name, at := range at {
				w, start := 100.0, time.Now()
				for range 2000 {
					w *= 1.0001
					sink += at(w)
				}
				best[name] = min(best[name], time.Since(start))
			}
		}
		b.ReportMetric(float64(best["Product.At"])/float64(best["floor"]), "Product.At-x-floor")
		b.ReportMetric(float64(best["form.at"])/float64(best["floor"]), "with-slopes-x-floor")
	})
	_ = sink
}

func BenchmarkMeasure(b *testing.B) {
	b.ReportAllocs()
	t := typical()
	var m Meter
	var out Figures
	for b.Loop() {
		if err := m.Measure(&t, 250e3, &out); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(m.walker.evals), "evaluations")
}
