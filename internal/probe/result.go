package probe

import (
	"math"

	"ionfall/internal/table"
)

// Quantity is a number with its standard error, or the reason why there is none.
type Quantity struct {
	Value, SE float64
	Unit      string
	// Reason says why the data do not tell it, if they do not: Value and SE are NaN then.
	Reason string
}

// Known reports whether the data tell the quantity.
func (q Quantity) Known() bool { return q.Reason == "" && !math.IsNaN(q.Value) }

func unknown(unit, reason string) Quantity {
	return Quantity{math.NaN(), math.NaN(), unit, reason}
}

// Named is a quantity under its key.
type Named struct {
	Key   string // with the unit as its last part
	Label string
	Quantity
}

// The keys of the results.
const (
	KeyElectronDensity = "electron_density_m3"
	KeyIonDensity      = "ion_density_m3"
	KeyTemperature     = "electron_temperature_eV"
	KeyPlasma          = "plasma_potential_V"
	KeyFloating        = "floating_potential_V"
)

// Method is one way to a quantity, for comparison.
type Method struct {
	Key, Label string
	Quantity
}

// Result is a reduced set of sweeps.
type Result struct {
	// Quantities in the order of display.
	Quantities []Named
	// Methods are other ways to the same quantities, and what follows from them.
	Methods []Method
	// Cautions say what to keep in mind, Notes what was detected.
	Cautions, Notes []string
	// Shape of the distribution that the data prefer.
	Shape string
	// ChiSquare of the fit of the characteristic per degree of freedom.
	ChiSquare float64
	// Sweeps and Points that were used.
	Sweeps, Points int
	// Characteristic and EEPF are the tables behind the figures.
	Characteristic, EEPF *table.Table

	fit         *characteristic
	correlation [5][5]float64
}

// Get returns a quantity by its key; one that is not there is not known.
func (r *Result) Get(key string) Quantity {
	for _, q := range r.Quantities {
		if q.Key == key {
			return q.Quantity
		}
	}
	return unknown("", "not determined")
}

// Choices are how a reduction is made.
type Choices struct {
	// Seed of the resampling.
	Seed uint64
	// Resamplings of the error estimate; 0 is DefaultResamplings.
	Resamplings int
}

// DefaultResamplings give errors to a tenth of themselves.
const DefaultResamplings = 60
