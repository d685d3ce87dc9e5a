package config

import (
	"fmt"

	"go.yaml.in/yaml/v4"
)

// Resolved is the input file with every default filled in and quantities in SI units (energies in
// eV, ratios in per cent). Parse reads it back as an identical Case, bit for bit, which is checked
// before it is returned; so a Case that was changed into an invalid one gives the errors of Parse.
func (c *Case) Resolved() ([]byte, error) {
	out, err := yaml.Dump(layout(c).encode(), yaml.WithLineWidth(-1))
	if err != nil {
		return nil, fmt.Errorf("writing the resolved input: %w", err)
	}
	back, err := Parse("resolved", out)
	if err != nil {
		return nil, err
	}
	if !back.Equal(c) {
		return nil, fmt.Errorf("the resolved input does not read back as the same case")
	}
	return out, nil
}
