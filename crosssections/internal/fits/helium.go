package fits

import "math"

// HeliumIonizationThreshold is the binding energy of the helium electrons [eV].
const HeliumIonizationThreshold = 24.587

// HeliumIonizationBEB is the ionization of helium by electrons in the binary-encounter-Bethe
// model, with orbital kinetic energy 39.51 eV and two electrons.
//
// Ref: Y.-K. Kim and M. E. Rudd, Phys. Rev. A 50, 3954 (1994), eq. (57).
func HeliumIonizationBEB(e float64) float64 {
	const (
		binding   = HeliumIonizationThreshold
		kinetic   = 39.51
		electrons = 2
		rydbergEV = 13.605693123
		bohr      = 5.29177210903e-11 // [m]
	)
	if e <= binding {
		return 0
	}
	t, u := e/binding, kinetic/binding
	s := 4 * math.Pi * bohr * bohr * electrons * sq(rydbergEV/binding)
	return s / (t + u + 1) * (math.Log(t)/2*(1-1/sq(t)) + 1 - 1/t - math.Log(t)/(t+1))
}

// HeliumIonIsotropic is the isotropic part of He+ on He; e is the centre-of-mass energy. It is
// held constant below 1e-4 eV.
//
// Ref: A. V. Phelps, compilation of ion-neutral cross sections, in the open-access collection.
func HeliumIonIsotropic(e float64) float64 {
	return 7.63e-20 / math.Sqrt(math.Max(e, 1e-4))
}

// HeliumIonBackscatter is the backscattered part of He+ on He; e is the centre-of-mass energy.
//
// Ref: as HeliumIonIsotropic; formula recalled, supported by measured drift velocities.
func HeliumIonBackscatter(e float64) float64 {
	return 1e-19 * math.Pow(e/1000, -0.15) * math.Pow(1+e/1000, -0.25) * math.Pow(1+5/e, -0.15)
}

// HeliumElasticBorn is the elastic momentum transfer of electrons in helium in the first Born
// approximation, energies [eV] and cross sections [m2].
func HeliumElasticBorn() [2][2]float64 {
	return [2][2]float64{{500, 1.4e-22}, {1000, 4.5e-23}}
}
