package rules

import (
	"context"
	"fmt"
	"runtime/debug"

	"halfplane/analysis"
	"halfplane/schema"
)

// Fault is a defect of the program that showed itself while a file was analysed.
type Fault struct {
	What  string
	Place string // the source line
}

func (f *Fault) Error() string { return f.What + " (" + f.Place + ")" }

// Prepare makes a case from a document: validated, typed, analysed. With problems the case is nil: a file that does not
// fit its schema is not analysed. A *Fault as the error is a defect of the program, reported with Internal; any other
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
		return nil, nil, &Fault{What: "analysing: " + err.Error(), Place: "analysis"}
	}
	return &Case{Spec: spec, Design: design, Result: result, Settings: settings, stages: distinctStages(result)}, nil, nil
}
