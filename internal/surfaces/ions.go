package surfaces

import "math"

// Yield is the mean number of electrons that an impact at an energy [eV] sets free.
type Yield func(energyEV float64) float64

// Constant returns a yield that does not depend on the energy.
func Constant(yield float64) Yield { return func(float64) float64 { return yield } }

// The yields of argon on metals, after A. V. Phelps and Z. Lj. Petrovic, Plasma Sources Sci.
// Technol. 8, R21 (1999). The coefficients are from memory. Of the first term for ions on a dirty
// surface, two forms are in use; they agree in their largest value of 0.032, at 48 and at 16 eV,
// and within 2 % above 700 eV.

// kinetic is the part that grows with the energy above an offset.
func kinetic(energyEV, scale, offset, roll, power float64) float64 {
	if energyEV <= offset {
		return 0
	}
	return scale * math.Pow(energyEV-offset, 1.2) / (1 + math.Pow(energyEV/roll, power))
}

// CleanMetalIon is the yield of Ar+ on a clean metal.
func CleanMetalIon(energyEV float64) float64 { return 0.07 + CleanMetalAtom(energyEV) }

// CleanMetalAtom is the yield of fast Ar on a clean metal.
func CleanMetalAtom(energyEV float64) float64 { return kinetic(energyEV, 1e-5, 500, 70000, 0.7) }

// DirtyMetalIon is the yield of Ar+ on a dirty metal, with the first term as recalled from the
// publication.
func DirtyMetalIon(energyEV float64) float64 {
	return 0.002*energyEV/(1+math.Pow(energyEV/30, 1.5)) + dirtyIon(energyEV)
}

// DirtyMetalIonRF is as DirtyMetalIon, with the first term in the form of later work on RF
// discharges.
func DirtyMetalIonRF(energyEV float64) float64 {
	return 0.006*energyEV/(1+math.Pow(energyEV/10, 1.5)) + dirtyIon(energyEV)
}

func dirtyIon(energyEV float64) float64 { return kinetic(energyEV, 1.05e-4, 80, 8000, 1.5) }

// DirtyMetalAtom is the yield of fast Ar on a dirty metal.
func DirtyMetalAtom(energyEV float64) float64 {
	return kinetic(energyEV, 7e-5, 32, 2800, 1.5) + kinetic(energyEV, 1e-4, 90, 8000, 1.5)
}
