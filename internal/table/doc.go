// Package table holds columns that label themselves: a name that ends in its unit, the unit as
// people write it, and a sentence saying what the numbers are. The results folder, the report and
// the viewer take their labels from here.
//
// A table is tidy: one row an observation, one column a variable, all columns equally long. A
// column holds numbers, whole numbers or texts. Among the numbers NaN means "no value".
//
// Names. The unit is the last part of the name (energy_eV), spelled as in the list of units. A
// standard error stands next to what it belongs to and is named after it: flux_m2ps and
// flux_m2ps_se. A name may be the dotted path of a result (ion_mean_energy_eV.grounded.all); then
// the unit ends one of its parts.
//
//	t := table.New("ion_energy", "energy of the ions at the electrodes")
//	t.AddText("electrode", "powered or grounded", electrode)
//	t.AddFloat("energy_eV", "eV", "centre of the bin", energyEV)
//	t.AddEstimate("flux_m2pseV", "1/(m2 s eV)", "flux per energy", flux, fluxSE)
//	err := t.Validate()
package table
