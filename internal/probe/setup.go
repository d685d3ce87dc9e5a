package probe

import (
	"math"

	"ionfall/internal/phys"
)

// Setup is what is known about a probe and the gas around it.
type Setup struct {
	// Radius and Length of the cylindrical tip [m].
	Radius, Length float64
	// Gas names the gas; IonMass is that of its ion [kg].
	Gas     string
	IonMass float64
	// Pressure [Pa] and Temperature [K] of the gas; a pressure of 0 is not known.
	Pressure, Temperature float64
	// IonTemperature [K] of the ions before the tip attracts them; 0 is that of the gas.
	IonTemperature float64
	// Resistance in series with the tip, part of which is plasma at the chamber's wall [Ohm].
	Resistance float64
	// RF is the amplitude of the residual voltage between tip and plasma, where it is known [V];
	// NaN lets the data bound it.
	RF float64
	// ElectronCrossSection and IonCrossSection with the gas, for mean free paths [m2]; 0 is not
	// known.
	ElectronCrossSection, IonCrossSection float64
}

// Area of the side of the tip [m2]; its end, a part radius/(2 length) more, is not counted, as is
// common practice.
func (s *Setup) Area() float64 { return 2 * math.Pi * s.Radius * s.Length }

// gasDensity is p/kT [1/m3]; 0 if the pressure is not known.
func (s *Setup) gasDensity() float64 {
	if !(s.Temperature > 0) {
		return 0
	}
	return s.Pressure / (phys.Boltzmann * s.Temperature)
}

// freePath is the mean free path [m]; infinite if it is not known.
func (s *Setup) freePath(crossSection float64) float64 {
	if n := s.gasDensity() * crossSection; n > 0 {
		return 1 / n
	}
	return math.Inf(1)
}

// DebyeLength of electrons of the density [1/m3] and temperature [eV], in m.
func DebyeLength(density, temperature float64) float64 {
	return math.Sqrt(phys.Epsilon0 * temperature / (phys.ElementaryCharge * density))
}

// ionFlux is the random flux of ions that i is normalised with, per density [m/s].
func (s *Setup) ionFlux(temperature float64) float64 {
	return math.Sqrt(phys.ElementaryCharge * temperature / (2 * math.Pi * s.IonMass))
}
