package config

import "go.yaml.in/yaml/v4"

// layout is the tree of all keys, bound to the fields of c. Its order is that of Resolved.
func layout(c *Case) mapping {
	return mapping{check: c.checkAreas, fields: []field{
		{key: "title", value: line{&c.Title, maxTitle}, doc: "A line for people."},
		{
			key: "gap", required: true,
			value: quantity{dst: &c.Gap, dim: length(), low: minGap, high: maxGap},
			doc: "Distance between the electrodes; x = 0 is the powered one, " +
				"x = gap the grounded one.",
		},
		{
			key: "geometry", value: geometryLayout(&c.Geometry),
			doc: "Form of the electrodes. Default: planar, of equal areas.",
		},
		{key: "gas", required: true, value: gasLayout(&c.Gas), doc: "The neutral background."},
		{
			key: "drive", required: true, value: driveLayout(&c.Drive),
			doc: "What drives the powered electrode, through what.",
		},
		{key: "electrodes", value: electrodesLayout(&c.Electrodes), doc: "The two walls."},
		{
			key: "accuracy", value: accuracyLayout(&c.Accuracy),
			doc: "Relative standard errors that end the run when they are reached.",
		},
		{
			key: "budget", value: budgetLayout(&c.Budget),
			doc: "What the run may cost before it ends short of its accuracy. Default: no limit.",
		},
		{
			key: "initial", value: initialLayout(&c.Initial),
			doc: "The uniform plasma at the start. Default: estimated.",
		},
		{
			key: "film", value: pointer[Film]{&c.Film, filmLayout},
			doc: "Growth of the film, to give ions and ion energy per deposited atom.",
		},
		{
			key: "ion_energy_thresholds", value: thresholdsLayout(&c.IonEnergyThresholds),
			doc: "The ion flux above each of these energies is reported.",
		},
		{
			key: "coulomb_collisions", value: boolean{&c.CoulombCollisions},
			doc: "Electrons collide with each other (Nanbu 1997). Default: false.",
		},
		{
			key: "seed", value: seed{&c.Seed},
			doc: "Selects the random numbers; the same seed gives the same bits. Default: 1.",
		},
		{
			key: "numerics", value: numericsLayout(&c.Numerics),
			doc: "auto picks everything; in a mapping, what is given is kept. Default: auto.",
		},
	}}
}

func gasLayout(g *Gas) value {
	if g.IonizationSharing == "" {
		g.IonizationSharing = EqualSharing
	}
	if g.ElectronScattering == "" {
		g.ElectronScattering = IsotropicScattering
	}
	return mapping{fields: []field{
		{
			key: "pressure", required: true,
			value: quantity{
				dst: &g.Pressure, dim: pressure(), low: "0 Pa", high: maxPressure,
				above: true,
			},
			doc: "Pressure of the mixture.",
		},
		{
			key: "temperature",
			value: quantity{
				dst: &g.Temperature, dim: gasTemperature(),
				low: minGasTemperature, high: maxGasTemperature,
			},
			doc: "Temperature of the gas. Default: 300 K.",
		},
		{
			key: "library", value: folder{&g.Library},
			doc: "Folder of gases of your own, relative to this file; a gas of the same name goes " +
				"before the bundled one. Default: the bundled gases alone.",
		},
		{
			key: "fast_neutrals", value: pointer[FastNeutrals]{&g.FastNeutrals, fastNeutralsLayout},
			doc: "Follow the molecules that ions hit to the walls. Default: not, as it costs time.",
		},
		{
			key: "ionization_sharing",
			value: choice{
				dst:     &g.IonizationSharing,
				options: []string{EqualSharing, UniformSharing, OpalSharing},
			},
			doc: "How both electrons share what an ionization leaves: equal halves, uniform, or " +
				"by the law of Opal, Peterson and Beaty (opal). Default: equal.",
		},
		{
			key: "electron_scattering",
			value: choice{
				dst:     &g.ElectronScattering,
				options: []string{IsotropicScattering, ForwardScattering},
			},
			doc: "Angles of elastic collisions of electrons: isotropic, or forward peaked as in a " +
				"screened Coulomb field with the same momentum transfer. Default: isotropic.",
		},
		{
			key: "mixture", required: true, value: mixture{&g.Mixture},
			doc: "Gases and their fractions of the molecules, which sum to 1.",
		},
	}}
}

func fastNeutralsLayout(f *FastNeutrals) value {
	if f.Threshold == 0 {
		f.Threshold = 1
	}
	return mapping{fields: []field{{
		key: "threshold",
		value: quantity{
			dst: &f.Threshold, dim: energy(), low: minFastThreshold, high: maxFastThreshold,
		},
		doc: "Energy above which they are followed. Default: 1 eV.",
	}}}
}

func electrodesLayout(e *Electrodes) value {
	return mapping{
		fields: []field{
			{key: "powered", value: electrodeLayout(&e.Powered, true), doc: "The wall at x = 0."},
			{key: "grounded", value: electrodeLayout(&e.Grounded, false), doc: "The wall at x = gap."},
		},
		check: func(d *decoder, n *yaml.Node, path string) {
			if !e.Powered.Substrate && !e.Grounded.Substrate {
				d.fail(n, path, "no substrate", "substrate: true on one electrode at least",
					"the accuracy of the run is that of the ions that arrive there")
			}
		},
	}
}

func electrodeLayout(e *Electrode, powered bool) value {
	fields := append(surfaceFields(e), []field{
		{
			key: "substrate", value: boolean{&e.Substrate},
			doc: "The film grows here; both electrodes may be substrates. " +
				"Default: true for the grounded one.",
		},
	}...)
	if powered {
		fields = append(fields, field{
			key: "area",
			value: quantity{
				dst: &e.Area, dim: area(), low: "0 m2", high: maxArea, above: true, optional: true,
			},
			doc: "Area of the powered electrode, for what is given in total. Default: none.",
		})
	}
	return mapping{fields: fields}
}

func accuracyLayout(a *Accuracy) value {
	goal := func(dst *float64) value {
		return quantity{dst: dst, dim: ratio(), low: minAccuracy, high: maxAccuracy}
	}
	return mapping{fields: []field{
		{key: "ion_energy", value: goal(&a.IonEnergy), doc: "Mean ion energy. Default: 1 %."},
		{key: "ion_flux", value: goal(&a.IonFlux), doc: "Ion flux. Default: 1 %."},
	}}
}

func budgetLayout(b *Budget) value {
	return mapping{optional: true, fields: []field{
		{
			key: "cpu",
			value: quantity{
				dst: &b.CPU, dim: duration(), low: minCPU, high: maxCPU,
				optional: true,
			},
			doc: "CPU time, over all cores. Default: no limit.",
		},
		{
			key: "periods", value: integer{dst: &b.Periods, low: 1, high: MaxPeriods, optional: true},
			doc: "Most RF periods to simulate. Default: no limit.",
		},
	}}
}

func initialLayout(i *Initial) value {
	return mapping{optional: true, fields: []field{
		{
			key: "density",
			value: quantity{
				dst: &i.Density, dim: density(), low: "0 /m3", high: maxDensity,
				above: true, optional: true,
			},
			doc: "Density of the electrons, and of the ions together. Default: estimated.",
		},
		{
			key: "electron_temperature",
			value: quantity{
				dst: &i.ElectronTemperature, dim: electronTemperature(),
				low: minElectronTemperature, high: maxElectronTemperature, optional: true,
			},
			doc: "Temperature of the electrons. Default: estimated.",
		},
	}}
}

func filmLayout(f *Film) value {
	return mapping{fields: []field{
		{
			key: "growth_rate", required: true,
			value: quantity{
				dst: &f.GrowthRate, dim: speed(), low: "0 m/s", high: maxGrowthRate,
				above: true,
			},
			doc: "Thickness gained in a time.",
		},
		{
			key: "atom_density", required: true,
			value: quantity{
				dst: &f.AtomDensity, dim: density(), low: "0 /m3",
				high: maxAtomDensity, above: true,
			},
			doc: "Number of atoms in a volume of film.",
		},
	}}
}

func thresholdsLayout(dst *[]float64) value {
	return list[float64]{
		dst: dst, max: maxThresholds, what: "energies",
		item: func(f *float64) value {
			return quantity{dst: f, dim: energy(), low: "0 eV", high: maxThreshold, above: true}
		},
	}
}
