package crosssections

import (
	"math"

	"ionfall/internal/phys"
)

// law is a cross section that follows from a few numbers instead of a table.
type law struct {
	rate     float64 // k at 300 K [m3/s]
	exponent float64 // k grows as T to this power
	from     float64 // sigma grows as 1 - from/E above the energy [eV]
	falls    float64 // sigma = k/g up to this energy [eV], 0 for no end; above it falls faster
	power    float64 // by (falls/E)^power
	langevin bool    // elastic, of the polarizability or a mobility
	mobility float64 // reduced, at zero field [cm2/(V s)]; 0 for the polarization limit
	part     float64 // of the rate
	floor    float64 // least cross section [m2]
}

const (
	lawLowest, lawHighest = 1e-4, 1e4 // energies of the rows [eV]
	lawRowsADecade        = 48        // linear interpolation keeps within 3e-4 of E^-1/2
)

const (
	// polarizationLimit is the reduced mobility of an ion of reduced mass 1 u in a gas of the
	// polarizability 1 A^3 [cm2/(V s)]: K0 = 13.853/sqrt(alpha mu).
	//
	// Ref: E. W. McDaniel and E. A. Mason, The Mobility and Diffusion of Ions in Gases (1973).
	polarizationLimit = 13.853
	// loschmidt is the density to which mobilities are reduced [1/m3].
	loschmidt = 2.6867811e25
)

// CaptureRate is the Langevin rate coefficient [m3/s] of an ion in a gas of the polarizability
// [A^3] at the reduced mass [kg]: q sqrt(pi alpha/(eps0 mu)).
//
// Ref: G. Gioumousis and D. P. Stevenson, J. Chem. Phys. 29, 294 (1958).
func CaptureRate(polarizability, reducedMass float64) float64 {
	return phys.ElementaryCharge *
		math.Sqrt(math.Pi*polarizability*1e-30/(phys.Epsilon0*reducedMass))
}

// momentumRate is the rate coefficient of momentum transfer [m3/s] that gives the reduced mobility
// [cm2/(V s)]: exact at zero field, where all collisions take the same rate.
func momentumRate(mobility, reducedMass float64) float64 {
	return phys.ElementaryCharge / (reducedMass * loschmidt * mobility * 1e-4)
}

// table is the cross section of the law for a reduced mass [kg] against the energy of the relative
// motion; polarizability [A^3] is that of the target.
func (l *law) table(polarizability, reducedMass float64) Table {
	rate := l.rate
	if l.langevin {
		mobility := l.mobility
		if mobility == 0 {
			mobility = polarizationLimit / math.Sqrt(polarizability*reducedMass/phys.AtomicMass)
		}
		rate = momentumRate(mobility, reducedMass) * l.part
	}
	at300 := 300 * phys.Boltzmann / phys.ElementaryCharge
	// k ~ T^p is the mean of a cross section C E^(p-1/2): k = C 2/sqrt(pi) Gamma(p+3/2)
	// sqrt(2 q/mu) T^p with T in eV.
	p := l.exponent
	c := rate / math.Pow(at300, p) * math.Sqrt(math.Pi) /
		(2 * math.Gamma(p+1.5) * math.Sqrt(2*phys.ElementaryCharge/reducedMass))
	return sampled(l.from, func(e float64) float64 {
		q := c * math.Pow(e, p-0.5)
		if l.from > 0 {
			q *= math.Max(0, 1-l.from/e)
		}
		if l.falls > 0 && e > l.falls {
			q *= math.Pow(l.falls/e, l.power)
		}
		return math.Min(math.Max(q, l.floor), maxCrossSection)
	})
}

// sampled tabulates a smooth function of the energy above an onset, closer just above it.
func sampled(onset float64, f func(energyEV float64) float64) Table {
	t := Table{Onset: onset}
	add := func(e float64) {
		t.Energy, t.CrossSection = append(t.Energy, e), append(t.CrossSection, f(e))
	}
	const decades = 8 // from lawLowest to lawHighest
	if onset > 0 {
		add(onset)
		for _, step := range [...]float64{1e-3, 3e-3, 0.01, 0.02, 0.04, 0.07, 0.1, 0.15, 0.2, 0.3} {
			add(onset * (1 + step))
		}
	}
	for i := range decades*lawRowsADecade + 1 {
		if e := lawLowest * math.Pow(10, float64(i)/lawRowsADecade); e > 1.32*onset {
			add(e)
		}
	}
	return t
}

// DefaultElastic is the elastic scattering of an ion in a gas that nothing is known about but the
// polarizability: isotropic, at the rate that gives the mobility of the polarization limit, and at
// least a quarter of the target's geometrical cross section, less what reacts. False if the gas
// has no polarizability.
func DefaultElastic(ion Ion, target *Gas, reactions []Process) (Process, bool) {
	alpha := target.Polarizability.Value
	if alpha == 0 {
		return Process{}, false
	}
	mu := ion.Mass * target.Mass / (ion.Mass + target.Mass)
	d := target.Diameter.Value * 1e-10
	l := law{langevin: true, part: 1, floor: math.Pi * d * d / 4}
	t := l.table(alpha, mu)
	for i, e := range t.Energy {
		for k := range reactions {
			at := e
			if reactions[k].Frame == Lab {
				at *= (ion.Mass + target.Mass) / target.Mass
			}
			t.CrossSection[i] -= reactions[k].Table.At(at)
		}
		t.CrossSection[i] = math.Max(0, t.CrossSection[i])
	}
	return Process{
		Name: ion.Name + " on " + target.Name + ", polarization", Kind: Isotropic,
		Projectile: ion.Name, Frame: CenterOfMass, Table: t,
		Source: Source{
			Citation: "polarization limit: " + target.Polarizability.Source.Citation,
			Status:   "computed",
			Note: "No published cross section: Langevin scattering tied to the mobility of the " +
				"polarization limit, less the reactions of the ion; at short range a quarter of " +
				"the square of the molecule's diameter times pi. An estimate.",
		},
	}, true
}

// DefaultNeutral is the scattering of a fast neutral in a gas, as of hard spheres: isotropic, of
// the mean of the diameters [A]. False if the gas has none.
func DefaultNeutral(name string, diameter float64, target *Gas) (Process, bool) {
	own := target.Diameter.Value
	if own == 0 {
		return Process{}, false
	}
	if diameter == 0 {
		diameter = own
	}
	d := 0.5 * (own + diameter) * 1e-10
	return Process{
		Name: name + " on " + target.Name + ", hard spheres", Kind: Isotropic, Projectile: name,
		Frame: CenterOfMass,
		Table: Table{
			Energy:       []float64{lawLowest, lawHighest},
			CrossSection: []float64{math.Pi * d * d, math.Pi * d * d},
		},
		Source: Source{
			Citation: "hard spheres: " + target.Diameter.Source.Citation, Status: "memory",
			Note: "No published cross section: spheres of the diameter that the viscosity shows. " +
				"An estimate, too large for fast particles.",
		},
	}, true
}

// DefaultNeutralization is the mutual neutralization of a positive and a negative ion at 300 K by
// the formula of Hickman. False if the electron affinity is not known.
//
// Ref: A. P. Hickman, J. Chem. Phys. 70, 4872 (1979).
func DefaultNeutralization(positive, negative Ion) (Pair, bool) {
	affinity := negative.Affinity.Value
	if affinity == 0 {
		return Pair{}, false
	}
	mu := positive.Mass * negative.Mass / (positive.Mass + negative.Mass)
	l := law{
		rate:     5.34e-13 * math.Pow(mu/phys.AtomicMass, -0.5) * math.Pow(affinity, -0.4),
		exponent: -0.5,
	}
	return Pair{
		Name:      positive.Name + " + " + negative.Name,
		Reactants: [2]string{positive.Name, negative.Name},
		Masses:    [2]float64{positive.Mass, negative.Mass},
		Table:     l.table(0, mu),
		Source: Source{
			Citation: "A. P. Hickman, J. Chem. Phys. 70, 4872 (1979), formula", Status: "computed",
			Note: "5.34e-7 A^-0.5 (T/300 K)^-0.5 EA^-0.4 cm3/s, A the reduced mass in u, EA in " +
				"eV: a fit to measurements within a factor of about 2.",
		},
	}, true
}
