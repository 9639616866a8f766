package report

import (
	"math"

	"halfplane/analysis"
	"halfplane/rules"
)

// proof is the certificates of a file as they were given.
func (p *proofOut) proof() *analysis.Proof {
	if p == nil {
		return nil
	}
	return &analysis.Proof{PhaseMargin: p.PhaseMargin.certificate(), GainMargin: p.GainMargin.certificate(), ModulusMargin: p.ModulusMargin.certificate()}
}

func (c *certificateOut) certificate() *analysis.Certificate {
	if c == nil {
		return nil
	}
	out := &analysis.Certificate{Limit: float64(c.Limit), At: c.At, Value: math.NaN(), Boxes: c.Boxes, Why: c.Why}
	for v := analysis.Proved; v <= analysis.Undecided; v++ {
		if v.String() == c.Verdict {
			out.Verdict = v
		}
	}
	if c.Value != nil {
		out.Value = float64(*c.Value)
	}
	if c.Left != nil {
		out.Left = float64(*c.Left)
	}
	return out
}

// record is what a ledger had on record of a finding.
func (r *recordOut) record(of rules.Finding, path string) *rules.Record {
	severity, _ := rules.ParseSeverity(r.Severity)
	out := &rules.Record{Path: path, Rule: of.Rule, Pointer: of.Pointer, Kind: of.Kind(), Severity: severity, Measured: math.NaN(), Limit: math.NaN()}
	if r.Measured != nil {
		out.Measured, out.Unit = r.Measured.Value, r.Measured.Unit
	}
	if r.Limit != nil {
		out.Limit, out.Unit = r.Limit.Value, r.Limit.Unit
	}
	return out
}
