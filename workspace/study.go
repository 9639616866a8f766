package workspace

import (
	"context"

	"halfplane/analysis"
	"halfplane/rules"
)

// Study asks for what goes beyond the worst corners: it takes longer, so that only who asks for it waits.
type Study struct {
	Sensitivities bool   // what each part does to the worst figures
	Units         int    // Monte Carlo over so many built units, 0: none
	Seed          uint64 // of the units, 0: analysis.DefaultSeed
	Prove         bool   // certificates for the margins
}

// prove finds certificates before the rules judge: a counterexample becomes a corner that they see.
func (s Study) prove(ctx context.Context, c *rules.Case, f *File, jobs int) error {
	if !s.Prove {
		return nil
	}
	proof, err := analysis.Prove(ctx, c.Design, c.Need(), analysis.ProveOptions{Jobs: jobs, Found: provedFrom(c.Result)})
	if err != nil {
		return err
	}
	f.Proof = proof
	for _, part := range [...]*analysis.Certificate{proof.PhaseMargin, proof.GainMargin, proof.ModulusMargin} {
		if part == nil || part.Verdict != analysis.Refuted {
			continue
		}
		if c.Result.Has(part.At) {
			continue
		}
		corner, err := analysis.At(c.Design, part.At)
		if err != nil {
			return err
		}
		c.Result.Add(corner)
	}
	return nil
}

// provedFrom is the analysis that a proof may start from: a quick one is not enough.
func provedFrom(r *analysis.Result) *analysis.Result {
	if r.Depth == analysis.Full {
		return r
	}
	return nil
}

// further adds what the rules do not need.
func (s Study) further(ctx context.Context, c *rules.Case, f *File, jobs int) (err error) {
	if s.Sensitivities {
		if f.Sensitivities, err = analysis.SensitivitiesOf(ctx, c.Design, c.Result); err != nil {
			return err
		}
	}
	if s.Units > 0 {
		f.Yield, err = analysis.YieldOf(ctx, c.Design, c.Need(), analysis.YieldOptions{Samples: s.Units, Seed: s.Seed, Jobs: jobs})
	}
	return err
}
