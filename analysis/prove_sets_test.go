package analysis

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/interval"
)

// Two ends of frequency are settled without following it; points beyond them must agree.
func TestTheEndsOfFrequencyHoldForEveryPointBeyondThem(t *testing.T) {
	for name, d := range covered() {
		r := rand.New(rand.NewPCG(3, uint64(len(name))))
		e, why := enclose(d)
		require.Empty(t, why)
		w, err := newWorker(d)
		require.NoError(t, err)
		settled := 0
		for range 40 {
			part := math.Pow(10, -3*r.Float64())
			var c cell
			x := nominalOf(d)
			for _, axis := range e.axes {
				a := d.Axes[axis]
				low := a.Min + (a.Max-a.Min)*(1-part)*r.Float64()
				c.low, c.high = append(c.low, low), append(c.high, low+(a.Max-a.Min)*part)
				x[axis] = low + (a.Max-a.Min)*part*r.Float64()
			}
			l, why := e.loopOver(&c)
			if why != "" {
				continue
			}
			w.set(x)
			require.True(t, w.hasLoop())
			for range 30 {
				u := math.Log(2*math.Pi*e.stage.FilterFrequency) + 20*r.Float64() - 14
				if e.largeBelow(&l, u) {
					settled++
					require.Greater(t, cmplx.Abs(w.gain.At(math.Exp(u-8*r.Float64()*r.Float64()))), 1.0, name)
				}
				if e.smallAbove(&l, u) {
					settled++
					require.Less(t, cmplx.Abs(w.gain.At(math.Exp(u+8*r.Float64()*r.Float64()))), 1.0, name)
				}
			}
		}
		assert.Greater(t, settled, 50, name)
	}
}

func TestWhatIsNotANumberAvoidsNothing(t *testing.T) {
	s := interval.Space{N: 3}
	bad := interval.Const(math.NaN())
	good := interval.Const(50)
	for _, set := range []forbidden{phaseSet{0.5}, gainSet{1}, discSet{0.5}} {
		assert.False(t, set.avoids(s, &bad, &bad), "%T", set)
		assert.False(t, set.avoids(s, &good, &bad), "%T", set)
		assert.False(t, set.beyond(math.NaN(), math.NaN()), "%T", set)
		assert.False(t, set.beyond(math.Inf(-1), math.Inf(1)), "%T", set)
		assert.True(t, set.avoids(s, &good, &good), "%T", set)
	}
}

// A corner that the whole set could miss: forms that straddle a set's edge by little, in every turn.
func TestASetIsAvoidedOnlyByFormsThatMissIt(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 4))
	s := interval.Space{N: 4}
	avoided := 0
	for range 4000 {
		var g, theta interval.Form
		g.Centre, theta.Centre = 1.5*r.NormFloat64(), 5*r.NormFloat64()
		for i := range s.N {
			g.Coef[i], theta.Coef[i] = 0.5*r.NormFloat64(), 0.5*r.NormFloat64()
		}
		g.Rest, theta.Rest = 0.05*r.Float64(), 0.05*r.Float64()
		angle, depth, radius := 1.2*r.Float64(), 1.5*r.Float64(), 0.8*r.Float64()
		phase, gain, disc := phaseSet{angle}.avoids(s, &g, &theta), gainSet{depth}.avoids(s, &g, &theta), discSet{radius}.avoids(s, &g, &theta)
		for _, yes := range []bool{phase, gain, disc} {
			if yes {
				avoided++
			}
		}
		before, beforeAngle := 0.0, 0.0
		for k := range 300 {
			gv, tv := g.Centre+g.Rest*(2*r.Float64()-1), theta.Centre+theta.Rest*(2*r.Float64()-1)
			for i := range s.N {
				eps := 2*r.Float64() - 1
				gv, tv = gv+g.Coef[i]*eps, tv+theta.Coef[i]*eps
			}
			turns := 2 * math.Pi * math.Round(tv/(2*math.Pi))
			now, last := tv-turns, beforeAngle-turns
			if disc {
				require.GreaterOrEqual(t, cmplx.Abs(1-cmplx.Rect(math.Exp(gv), tv)), radius-1e-12)
			}
			// The values are convex: on the way between two of them g = 0 (θ = 0) is crossed at a value too.
			if k > 0 && phase && before*gv < 0 {
				at := math.Remainder(now+(last-now)*gv/(gv-before), 2*math.Pi)
				require.GreaterOrEqual(t, math.Abs(at), angle-1e-12)
			}
			if k > 0 && gain && last*now < 0 {
				at := gv + (before-gv)*now/(now-last)
				require.False(t, at > -depth+1e-12 && at < -1e-12, "%v", at)
			}
			before, beforeAngle = gv, tv
		}
	}
	assert.Greater(t, avoided, 1000)
}
