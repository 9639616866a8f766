package rules

import (
	"context"
	"errors"
	"fmt"
	"runtime/debug"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/synthesis"
	"halfplane/schema"
)

// Fault is a defect of the program that showed itself while a file was analysed.
type Fault struct {
	What  string
	Place string // the source line
}

func (f *Fault) Error() string { return f.What + " (" + f.Place + ")" }

// beyondModels is the problem of a design whose numbers lie beyond everything that can be computed, however well they are
// written; which of them it is cannot be told, so it stands at the file's first key.
func beyondModels(spec *schema.Spec) schema.Problem {
	at := spec.Place("")
	return schema.Problem{
		Rule: quantity.Name, Doc: at.Doc, Start: at.Start, End: at.End,
		Message: "some number of this design is so large or so small that no loop can be computed from it: check exponents and units",
	}
}

// Prepare makes a case from a document: validated, typed, analysed. With problems the case is nil: a file that does not
// fit its schema, or whose numbers are outside every model, is not analysed. A *Fault as the error is a defect of the program, reported with Internal; any other
// error (the context's) is the caller's.
func Prepare(ctx context.Context, doc *schema.Document, r schema.Resolver, settings Settings, o analysis.Options) (c *Case, problems []schema.Problem, err error) {
	defer func() {
		if fault := recover(); fault != nil {
			c, err = nil, &Fault{What: fmt.Sprint(fault), Place: faultPlace(debug.Stack())}
		}
	}()
	spec, problems := schema.Validate(doc, r)
	if len(problems) > 0 || spec == nil {
		return nil, problems, nil
	}
	design := spec.Design()
	result, err := analysis.Analyse(ctx, design, o)
	if err != nil {
		if ctx.Err() != nil {
			return nil, nil, fmt.Errorf("analysing %s: %w", doc.Name, err)
		}
		var fault *analysis.Fault
		if errors.As(err, &fault) {
			return nil, nil, &Fault{What: "analysing: " + err.Error(), Place: faultPlace(fault.Stack)}
		}
		return nil, []schema.Problem{beyondModels(spec)}, nil
	}
	return &Case{
		Spec: spec, Design: design, Result: result, Settings: settings, every: list, stages: distinctStages(result),
		pointed: &pointed{map[*analysis.Setting]*plant.Circuit{}, map[*analysis.Setting]*network.Parts{}, map[int][]Mend{}, map[slack]*synthesis.Problem{}},
	}, nil, nil
}
