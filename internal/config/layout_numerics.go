package config

import (
	"fmt"

	"go.yaml.in/yaml/v4"
)

// numericsLayout: every key accepts auto, and so does the whole.
func numericsLayout(n *Numerics) value {
	return mapping{
		word: "auto",
		fields: []field{
			{
				key: "cells", value: integer{
					dst: &n.Cells, low: MinCells, high: MaxCells, auto: true,
					why: "two sheaths and a bulk cannot be told apart in fewer than 8 cells",
				},
				doc: "Cells between the electrodes. Default: auto.",
			},
			{
				key: "steps_per_period",
				value: integer{
					dst: &n.StepsPerPeriod, low: MinStepsPerPeriod,
					high: MaxStepsPerPeriod, auto: true,
					why: "fewer than 20 steps do not show the shape of a cosine",
				},
				doc: "Electron steps in a period of the fundamental. Default: auto.",
			},
			{
				key: "particles_per_cell",
				value: integer{
					dst: &n.ParticlesPerCell, low: 1, high: MaxParticlesPerCell,
					auto: true,
				},
				doc: "Particles of each species in a cell, at the start. Default: auto.",
			},
			{
				key: "scheme",
				value: choice{
					dst: &n.Scheme, auto: true,
					options: []string{MomentumConserving, EnergyConserving},
				},
				doc: "Interpolation of the field: momentum_conserving is linear between nodes; " +
					"energy_conserving is constant in a cell, and stays accurate with cells of " +
					"several Debye lengths. Default: auto.",
			},
			{
				key:   "ion_substeps",
				value: integer{dst: &n.IonSubsteps, low: 1, high: MaxIonSubsteps, auto: true},
				doc: "Ions move once every so many electron steps; divides steps_per_period. " +
					"Default: auto.",
			},
			{
				key: "periods", value: integer{dst: &n.Periods, low: 1, high: MaxPeriods, auto: true},
				doc: "Total number of RF periods of a run of fixed length, which makes no " +
					"density extrapolation and averages over the last average_periods. Default: auto, " +
					"the run ends when its accuracy is reached.",
			},
			{
				key:   "average_periods",
				value: integer{dst: &n.AveragePeriods, low: 1, high: MaxPeriods, auto: true},
				doc: "RF periods at the end of a run of fixed length that are averaged; needs " +
					"periods and is at most as many. Default: auto.",
			},
			{
				key: "density_extrapolation",
				value: choice{
					dst:     &n.Extrapolation,
					options: []string{ExtrapolationAuto, ExtrapolationOff},
				},
				doc: "off forbids the steps that project the density ahead while the run " +
					"settles. Default: auto.",
			},
		},
		check: n.check,
	}
}

// check holds the rules between the settings.
func (n *Numerics) check(d *decoder, _ *yaml.Node, path string) {
	fail := func(key, got, want string) {
		key = under(path, key)
		at := d.pos[key]
		d.fail(&yaml.Node{Line: at.line, Column: at.col}, key, got, want, "")
	}
	if n.IonSubsteps > 0 && n.StepsPerPeriod%n.IonSubsteps != 0 {
		fail("ion_substeps", fmt.Sprint(n.IonSubsteps),
			fmt.Sprintf("a divisor of the %d steps_per_period", n.StepsPerPeriod))
	}
	if n.AveragePeriods > 0 && n.Periods == 0 {
		fail("average_periods", fmt.Sprintf("%d without periods", n.AveragePeriods),
			"periods beside it")
	}
	if n.Periods > 0 && n.AveragePeriods > n.Periods {
		fail("average_periods", fmt.Sprint(n.AveragePeriods),
			fmt.Sprintf("at most the %d periods of the run", n.Periods))
	}
}
