package config

import (
	"reflect"
)

// Case is a checked input. It is plain data: change a copy freely, and let Resolved check it.
type Case struct {
	// Title is a line for people, or "".
	Title string
	// Gap is the distance between the electrodes [m]: x = 0 is the powered one.
	Gap        float64
	Geometry   Geometry
	Gas        Gas
	Drive      Drive
	Electrodes Electrodes
	Accuracy   Accuracy
	Budget     Budget
	Initial    Initial
	// Film is nil when no growth data were given.
	Film *Film
	// IonEnergyThresholds are the energies above which the ion flux is asked for [eV].
	IonEnergyThresholds []float64
	// CoulombCollisions of the electrons with each other.
	CoulombCollisions bool
	// Seed selects the random numbers.
	Seed     uint64
	Numerics Numerics

	origin *origin
}

// Gas is the neutral background.
type Gas struct {
	// Pressure of the mixture [Pa].
	Pressure float64
	// Temperature of the mixture [K].
	Temperature float64
	// Library is a folder of gases as written, or "": its gases go before the bundled ones. It
	// is relative to the folder of the input file.
	Library string
	// IonizationSharing is EqualSharing, UniformSharing or OpalSharing.
	IonizationSharing string
	// ElectronScattering is IsotropicScattering or ForwardScattering.
	ElectronScattering string
	// FastNeutrals is nil where they are not followed.
	FastNeutrals *FastNeutrals
	// Mixture in the order of the file; the fractions sum to 1 within 1e-6.
	Mixture []Component
}

// The words for the collision model of electrons.
const (
	EqualSharing        = "equal"
	UniformSharing      = "uniform"
	OpalSharing         = "opal"
	IsotropicScattering = "isotropic"
	ForwardScattering   = "forward"
)

// FastNeutrals asks for the molecules that ions hit to be followed to the walls.
type FastNeutrals struct {
	// Threshold is the energy above which they are followed [eV].
	Threshold float64
}

// Component is one gas of a mixture.
type Component struct {
	// Gas is its name as written; whether such a gas is known is for the caller to decide.
	Gas string
	// Fraction of the molecules, above 0 and at most 1.
	Fraction float64
}

// Geometry is the form of the electrodes.
type Geometry struct {
	// Shape is Planar, Cylindrical or Spherical.
	Shape string
	// AreaRatio is the area of the grounded electrode over that of the powered one.
	AreaRatio float64
}

// The words that Geometry.Shape may hold.
const (
	Planar      = "planar"
	Cylindrical = "cylindrical"
	Spherical   = "spherical"
)

// Drive is what the generator gives: V(t) = bias + sum of cosines, and what connects it with the
// powered electrode.
type Drive struct {
	// Tones, unless there is a series or a trace.
	Tones []Tone
	// Series names tones; nil if they are listed.
	Series *Series
	// Trace is a measured waveform, or nil.
	Trace *Trace
	// Pulse switches the tones on and off; nil for a steady drive.
	Pulse *Pulse
	// Bias is the constant part [V].
	Bias float64
	// BlockingCapacitor [F], Resistance [ohm] and Inductance [H] are in series with the electrode.
	BlockingCapacitor, Resistance, Inductance Amount
	// Power [W] is what the electrode is to take, Current [A] the root mean square of its current,
	// SelfBias [V] its mean voltage: one of them at most, which then finds the voltage.
	Power, Current Amount
	SelfBias       float64
	// VoltageLimit is the largest sum of amplitudes to try [V]; 0 is the default.
	VoltageLimit float64
}

// Tone is one term, amplitude * cos(2 pi frequency t + phase).
type Tone struct {
	// Frequency [Hz].
	Frequency float64
	// Amplitude, not peak to peak [V]; 0 where a current or a target is given instead.
	Amplitude float64
	// Current is the amplitude of a given current density [A/m2]; 0 for a voltage.
	Current float64
	// Ratio of the amplitudes where a target finds them; 0 for 1.
	Ratio float64
	// Phase [rad].
	Phase float64
}

// Electrodes are the two walls.
type Electrodes struct {
	// Powered is at x = 0, Grounded at x = gap.
	Powered, Grounded Electrode
}

// Electrode is one wall.
type Electrode struct {
	// IonSecondaryYield is the mean number of electrons an arriving ion sets free, of those that
	// are not in IonYields.
	IonSecondaryYield float64
	// IonYields are those of single ions; the others have none.
	IonYields []IonYield
	// IonYieldModel is a word for a yield as a function of the energy, or "".
	IonYieldModel string
	// SecondaryElectronEnergy is the energy they start with [eV].
	SecondaryElectronEnergy float64
	// ElectronReflection is the part of the arriving electrons that is reflected, below 1.
	ElectronReflection float64
	// Emission by electrons; nil for none.
	Emission *Emission
	// Dielectric layer on the wall; nil for none.
	Dielectric *Layer
	// Floating says that a wafer on the wall takes no direct current.
	Floating bool
	// Substrate says that the film grows here.
	Substrate bool
	// Area of the electrode [m2]; 0 if not given. Only the powered one has it.
	Area float64
}

// Accuracy is the relative standard error that ends a run when it is reached.
type Accuracy struct {
	// IonEnergy is that of the mean ion energy, IonFlux that of the ion flux; 0.01 is 1 %.
	IonEnergy, IonFlux float64
}

// Budget ends a run that has not reached its accuracy; 0 is no limit.
type Budget struct {
	// CPU time [s].
	CPU float64
	// Periods is the number of RF periods.
	Periods int
}

// Initial is the uniform plasma at the start; 0 is to be estimated.
type Initial struct {
	// Density of the electrons [1/m3].
	Density float64
	// ElectronTemperature [K].
	ElectronTemperature float64
}

// Film is the growth that the ion flux is compared with.
type Film struct {
	// GrowthRate is the thickness gained a second [m/s].
	GrowthRate float64
	// AtomDensity is the number of atoms in a volume of film [1/m3].
	AtomDensity float64
}

// Numerics are the numerical settings; 0 and "" are chosen automatically.
type Numerics struct {
	// Cells between the electrodes.
	Cells int
	// StepsPerPeriod is the number of electron steps in a period of the fundamental.
	StepsPerPeriod int
	// ParticlesPerCell of each species, at the start.
	ParticlesPerCell int
	// Scheme is MomentumConserving, EnergyConserving or "".
	Scheme string
	// IonSubsteps K: ions move once every K electron steps.
	IonSubsteps int
	// Periods is the whole length of a run of fixed length, in RF periods; 0 lets the accuracy
	// decide. A run of fixed length makes no density extrapolation.
	Periods int
	// AveragePeriods is how many of them, the last ones, are averaged over.
	AveragePeriods int
	// Extrapolation is ExtrapolationAuto, or ExtrapolationOff to forbid the steps that project
	// the density ahead while the run settles.
	Extrapolation string
}

// The words that Numerics.Scheme and Numerics.Extrapolation may hold.
const (
	MomentumConserving = "momentum_conserving"
	EnergyConserving   = "energy_conserving"
	ExtrapolationAuto  = "auto"
	ExtrapolationOff   = "off"
)

// newCase is a Case with all defaults; what has none is zero.
func newCase() *Case {
	wall := Electrode{SecondaryElectronEnergy: 1}
	substrate := wall
	substrate.Substrate = true
	return &Case{
		Geometry:   Geometry{Shape: Planar, AreaRatio: 1},
		Gas:        Gas{Temperature: 300},
		Electrodes: Electrodes{Powered: wall, Grounded: substrate},
		Accuracy:   Accuracy{IonEnergy: 0.01, IonFlux: 0.01},
		Seed:       1,
		Numerics:   Numerics{Extrapolation: ExtrapolationAuto},
	}
}

// Equal compares the values of two cases, not where they were written.
func (c *Case) Equal(other *Case) bool {
	if c == nil || other == nil {
		return c == other
	}
	return reflect.DeepEqual(c.bare(), other.bare())
}

// bare is a copy without positions, and with empty lists as nil.
func (c *Case) bare() Case {
	b := *c
	b.origin = nil
	if len(b.IonEnergyThresholds) == 0 {
		b.IonEnergyThresholds = nil
	}
	if len(b.Gas.Mixture) == 0 {
		b.Gas.Mixture = nil
	}
	if len(b.Drive.Tones) == 0 {
		b.Drive.Tones = nil
	}
	for _, e := range []*Electrode{&b.Electrodes.Powered, &b.Electrodes.Grounded} {
		if len(e.IonYields) == 0 {
			e.IonYields = nil
		}
	}
	return b
}
