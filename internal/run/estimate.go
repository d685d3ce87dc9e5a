package run

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// estimate is a first guess of the discharge, before anything has been simulated.
type estimate struct {
	ElectronEV float64 // temperature [eV]
	Density    float64 // in the middle [1/m3]
	Sheath     float64 // largest width [m]
	IonFlux    float64 // [1/(m2 s)]
}

// estimate solves the homogeneous model of a symmetric discharge: electron temperature from the
// balance of ionization and loss, density from the power balance, sheath width from the smaller
// of the collisionless and collisional Child laws. Within a factor of 3 where tried, worse at
// low pressure; the pilot corrects it.
//
// Ref: M. A. Lieberman and A. J. Lichtenberg, Principles of Plasma Discharges and Materials
// Processing, 2nd ed. (2005), ch. 11 (formulas from memory).
func (p *Plan) estimate() estimate {
	const ionCrossSection = 1e-18 // of momentum transfer at thermal energies, typical [m2]
	gas := p.Gases[0]
	ion := p.heavy[0].Mass
	n := p.gasDensity()
	gap, voltage := p.Case.Gap, 0.5*math.Max(20, p.largestVoltage())
	omega := 2 * math.Pi * float64(p.loudest().Harmonic) / p.period()
	path := 1 / (n * ionCrossSection)
	e := estimate{Sheath: 0.15 * gap}
	for range 60 {
		bulk := gap - 2*e.Sheath
		h := 0.86 / math.Sqrt(3+bulk/(2*path))
		e.ElectronEV = p.balanceTemperature(bulk/(2*h), ion)
		te := e.ElectronEV
		bohm := math.Sqrt(phys.ElementaryCharge * te / ion)
		ionize, excite, loss, elastic := p.rates(te)
		stochastic := 0.61 * math.Sqrt(phys.ElectronMass/phys.ElementaryCharge) *
			phys.Epsilon0 * omega * omega * math.Sqrt(te) * voltage
		ohmic := 1.73 * phys.ElectronMass / (2 * phys.ElementaryCharge) * h * phys.Epsilon0 *
			omega * omega * n * elastic * math.Sqrt(te) * math.Sqrt(voltage) * bulk
		perIon := (ionize+excite)/loss + 3*phys.ElectronMass/gas.Mass*te*elastic/loss + 2*te
		edge := (stochastic + ohmic/2) / (phys.ElementaryCharge * bohm * perIon)
		e.IonFlux = edge * bohm
		e.Density = edge / h
		e.Sheath = 0.5 * (e.Sheath + math.Min(0.4*gap, childWidth(voltage, e.IonFlux, ion, path)))
	}
	return e
}

// childWidth returns the smaller of the collisionless and collisional width of an RF sheath [m].
//
// Refs: M. A. Lieberman, IEEE Trans. Plasma Sci. 16, 638 (1988) and 17, 338 (1989) (from memory).
func childWidth(voltage, flux, ion, path float64) float64 {
	current := phys.ElementaryCharge * flux
	k := phys.Epsilon0 * math.Sqrt(2*phys.ElementaryCharge/ion) / current
	free := math.Sqrt(0.823 * k * math.Pow(0.83*voltage, 1.5))
	collisional := math.Pow(1.68*k*math.Pow(0.78*voltage, 1.5)*math.Sqrt(path), 0.4)
	return math.Min(free, collisional)
}

// balanceTemperature solves ionization rate x effective length = Bohm speed for Te [eV].
func (p *Plan) balanceTemperature(length, ion float64) float64 {
	low, high := 0.3, 30.0
	for range 50 {
		te := math.Sqrt(low * high)
		if p.ionizationRate(te)*p.gasDensity()*length > math.Sqrt(phys.ElementaryCharge*te/ion) {
			high = te
		} else {
			low = te
		}
	}
	return low
}

// rates returns, for a Maxwellian of temperature te [eV] and the mixture: the energy spent per
// volume rate on ionization and on excitation [eV m3/s], the ionization and elastic rate
// coefficients [m3/s].
func (p *Plan) rates(te float64) (ionizeEV, exciteEV, ionize, elastic float64) {
	for i, g := range p.Gases {
		part := p.Case.Gas.Mixture[i].Fraction
		for k := range g.Electron {
			process := &g.Electron[k]
			rate := part * maxwellRate(&process.Table, te)
			switch process.Kind {
			case crosssections.Elastic:
				elastic += rate
			case crosssections.Ionization:
				ionizeEV += rate * process.Threshold
			default:
				exciteEV += rate * process.Threshold
			}
		}
	}
	return ionizeEV, exciteEV, p.ionizationRate(te), elastic
}

// ionizationRate is the rate coefficient of ionization alone, which costs the least [m3/s].
func (p *Plan) ionizationRate(te float64) float64 {
	sum := 0.0
	for i, g := range p.Gases {
		for k := range g.Electron {
			if process := &g.Electron[k]; process.Kind == crosssections.Ionization {
				sum += p.Case.Gas.Mixture[i].Fraction * maxwellRate(&process.Table, te)
			}
		}
	}
	return math.Max(sum, 1e-30)
}

// maxwellRate returns the mean of sigma v over a Maxwellian of temperature te [eV], by the
// trapezoidal rule up to 25 te, which leaves out less than 1e-9.
func maxwellRate(t *crosssections.Table, te float64) float64 {
	const points = 400
	speed := math.Sqrt(2 * phys.ElementaryCharge / phys.ElectronMass)
	sum := 0.0
	for i := 1; i < points; i++ {
		e := 25 * te * float64(i) / points
		sum += t.At(e) * e * math.Exp(-e/te)
	}
	return 2 / math.Sqrt(math.Pi) * math.Pow(te, -1.5) * speed * sum * 25 * te / points
}
