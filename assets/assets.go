// Package assets holds what the program carries with it, as plain bytes: the
// example study with its data, and the schema of the study file.
package assets

import "embed"

//go:embed examples/*.arrowroot examples/*.csv
var examples embed.FS

// Schema is the JSON Schema of the study file.
//
//go:embed study.schema.json
var Schema []byte

// ExampleName is the file name of the built-in example study.
const ExampleName = "hedgerows.arrowroot"

// Example is the text of a built-in study or of its data, by file name.
func Example(name string) ([]byte, error) { return examples.ReadFile("examples/" + name) }
