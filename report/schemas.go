package report

import _ "embed"

//go:embed schemas/findings.json
var findingsSchema []byte

//go:embed schemas/figures.json
var figuresSchema []byte

// FindingsSchema is the JSON Schema of what JSON writes.
func FindingsSchema() []byte { return findingsSchema }

// FiguresSchema is the JSON Schema of what JSONFigures writes.
func FiguresSchema() []byte { return figuresSchema }
