package config

// Every cap on the input, and why it is there. Quantities are written as in the file, since the
// messages show them.

const (
	// MaxFileBytes is far above any input written by hand (about 1 kB), and small enough that a
	// wrong file (a checkpoint, a disk image) fails at once.
	MaxFileBytes = 1 << 20
	// maxTitle keeps a title on one line of a report.
	maxTitle = 200
	// maxPath is the longest name of a file that systems take.
	maxPath = 4096
	// maxGasName: names become parts of column names.
	maxGasName = 32
	// maxQuantity bounds the digits that have to be converted exactly.
	maxQuantity = 64

	// Below 1 mm the sheaths of any RF discharge fill the gap; above 1 m nothing is plane.
	minGap, maxGap = "1 mm", "1 m"
	// At 1 bar an electron collides thousands of times in an RF period: no longer this physics.
	maxPressure = "1e5 Pa"
	// Colder gases condense, hotter ones dissociate.
	minGasTemperature, maxGasTemperature = "50 K", "3000 K"
	// maxComponents: each gas adds a table of collisions for every species.
	maxComponents = 20
	// Below 0.2 eV the gas's own motion makes fast neutrals; above 100 eV few are left.
	minFastThreshold, maxFastThreshold = "0.2 eV", "100 eV"
	// fractionTolerance allows thirds written with six digits.
	fractionTolerance = "1e-6"

	// maxAreaRatio: beyond it nearly all of the gap is far from the powered electrode.
	maxAreaRatio = 1000
	// maxArea: the largest panels are some m2.
	maxArea = "100 m2"
	// defaultVoltageLimit is above what capacitive reactors are driven with.
	defaultVoltageLimit = 2000
	// maxHarmonics of a series or trace: beyond it steps a period would have to be many.
	maxHarmonics = 100
	// maxPulse bounds the steps in a period of the pulses.
	maxPulse = 1000
	// maxTones is ten times what waveform tailoring uses.
	maxTones = 100
	// Above 10 GHz the field is no longer electrostatic at any gap allowed here.
	maxFrequency = "10 GHz"
	// maxHarmonic bounds the steps in a period of the fundamental.
	maxHarmonic = 1000
	// Above 100 kV electrons at the wall are relativistic.
	maxVoltage = "100 kV"
	// maxCurrent: far above what any sheath carries.
	maxCurrent = "1e6 A/m2"
	// Ten turns; more is a wrong unit.
	minPhase, maxPhase = "-3600 deg", "3600 deg"

	// maxYield: slow heavy ions on oxides reach about 1; a wrong unit (per cent) exceeds 10.
	maxYield = 10
	// maxIons: no mixture has more.
	maxIons = 64
	// maxSecondaryEnergy: electrons set free by slow ions start with a few eV.
	maxSecondaryEnergy = "1000 eV"

	// Errors scale as one over the root of the time: 0.01 % takes 10 000 times as long as 1 %;
	// and with an error above 50 % the estimate of the error itself is of no use.
	minAccuracy, maxAccuracy = "0.01 %", "50 %"
	// Below a second nothing is computed; a year is longer than any machine stays up.
	minCPU, maxCPU = "1 s", "365 d"
	// MaxPeriods is more than a minute at 13.56 MHz, beyond any run.
	MaxPeriods = 1_000_000_000
	// Above 1e24 /m3 more of the gas is ionized than the model allows (1e5 Pa: 2e25 /m3).
	maxDensity = "1e24 /m3"
	// Below 50 K electrons would be colder than any gas; 1e7 K is 860 eV.
	minElectronTemperature, maxElectronTemperature = "50 K", "1e7 K"
	// The fastest growth known is some um/s; the densest solid (diamond) has 1.8e29 /m3.
	maxGrowthRate, maxAtomDensity = "1 mm/s", "1e30 /m3"
	// maxThresholds: each is a column of the results.
	maxThresholds = 20
	// No ion can gain more than the largest bias and amplitudes together allow.
	maxThreshold = "1000 keV"

	// MinCells is a limit: with fewer, two sheaths and a bulk cannot be told apart.
	MinCells = 8
	// MaxCells is a limit: 16384 cells of 1 m are 60 um, below the Debye length of most plasmas here.
	MaxCells = 16384
	// MinStepsPerPeriod is a limit: fewer than 20 steps do not show the shape of a cosine.
	MinStepsPerPeriod = 20
	// MaxStepsPerPeriod is a limit: a step of 0.1 ps at 13.56 MHz, far below any plasma period here.
	MaxStepsPerPeriod = 1_000_000
	// MaxParticlesPerCell is a limit: with it the noise of a cell is 0.1 %, at 16 GB for 512 cells.
	MaxParticlesPerCell = 1_000_000
	// MaxIonSubsteps is a limit: the field an ion feels is an average over them.
	MaxIonSubsteps = 1000
)
