package config

import (
	"encoding/json"
	"fmt"

	"github.com/invopop/jsonschema"
)

// Schema is a JSON Schema (2020-12) of the input file for editors. It accepts whatever Parse
// accepts; it cannot express the rules between values (sums, fundamentals, divisors) and most
// limits of quantities, since those are text.
func Schema() ([]byte, error) {
	s := layout(newCase()).schema()
	s.Version = jsonschema.Version
	s.Title = "ionfall input"
	s.Description = "One run of a capacitive RF plasma. Quantities are text with a unit."
	out, err := json.MarshalIndent(s, "", "  ")
	if err != nil {
		return nil, fmt.Errorf("writing the schema: %w", err)
	}
	return append(out, '\n'), nil
}
