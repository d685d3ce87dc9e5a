package crosssections

// Limits of what is read, so that a wrong file is refused with a reason instead of filling the
// memory. They are an order of magnitude and more above the largest sets in use.
const (
	maxGasFileBytes      = 256 << 10 // gas.yaml: hand-written text
	maxExchangeFileBytes = 64 << 20  // a whole database in exchange form
	maxRows              = 100_000   // rows a table: 0.01 eV steps up to 1 keV
	maxProcesses         = 10_000    // blocks of an exchange file
	maxGasProcesses      = 1_000     // processes, ions or sets of one gas
	maxErrors            = 100       // errors kept for one file; the cause is one of the first

	// MaxTableFileBytes is the size of a table of the project's own form, the largest of the files.
	MaxTableFileBytes = 4 << 20
	// MaxGases is the number of gas folders of a library.
	MaxGases = 1_000

	// maxCrossSection [m2] is above any real cross section at the energies of a discharge;
	// larger values are a wrong unit (cm2, 1e-20 m2).
	maxCrossSection = 1e-14
	// maxEnergyEV is above any energy of a discharge; larger values are a wrong unit.
	maxEnergyEV = 1e9
)
