package report

import _ "embed"

//go:embed schemas/findings.json
var findingsSchema []byte

//go:embed schemas/figures.json
var figuresSchema []byte

//go:embed schemas/comparison.json
var comparisonSchema []byte

// ComparisonSchema is the JSON Schema of what JSONComparison writes.
func ComparisonSchema() []byte { return comparisonSchema }

// FindingsSchema is the JSON Schema of what JSON writes.
func FindingsSchema() []byte { return findingsSchema }

// FiguresSchema is the JSON Schema of what JSONFigures writes.
func FiguresSchema() []byte { return figuresSchema }
