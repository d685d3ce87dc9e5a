package diagnostics

const (
	// PhaseBins is the resolution of RF phase: finer than any sheath motion that a film grower
	// looks at, coarse enough for good statistics.
	PhaseBins = 64
	// ionEnergyBins is about how many bins the energies of ions are sorted into.
	ionEnergyBins = 400
	// angleBins divides 0 to 90 degrees of incidence.
	angleBins = 90
	// angleEnergyBins divides the ion energies in the angle table.
	angleEnergyBins = 40
	// fewBatches is how many batches a short average is to have.
	fewBatches = 20
	// centerPart is the part of the gap around its middle whose averages are called central.
	centerPart = 0.1
)
