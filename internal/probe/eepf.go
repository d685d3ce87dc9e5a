package probe

import (
	"errors"
	"fmt"
	"math"

	"ionfall/internal/phys"
)

// Distribution is an EEPF on a grid of energies, exponential between them.
type Distribution struct {
	energy []float64 // [eV], from 0, increasing
	value  []float64 // [eV^-3/2], above 0
	// retarded[k] is the integral from energy[k] of (E - energy[k]) f dE, beyond[k] that of f.
	retarded, beyond []float64
}

// smallestEEPF stands for 0, which a logarithm cannot have.
const smallestEEPF = 1e-300

// NewDistribution makes a distribution of values at increasing energies [eV]. It is carried on to
// energy 0 with the slope of the first two values, and normalised.
func NewDistribution(energy, value []float64) (*Distribution, error) {
	if len(energy) != len(value) || len(energy) < 3 {
		return nil, fmt.Errorf("probe: a distribution of %d energies and %d values, want as many, "+
			"and 3 at least", len(energy), len(value))
	}
	d := &Distribution{}
	for k, e := range energy {
		ok := value[k] >= 0 && !math.IsInf(value[k], 1) && e >= 0
		if !ok || k > 0 && !(e > energy[k-1]) {
			return nil, fmt.Errorf("probe: distribution value %g at %g eV, want values from 0 at "+
				"increasing energies", value[k], e)
		}
	}
	if energy[0] > 0 {
		first := value[0]
		if value[1] > 0 && value[0] > 0 {
			first *= math.Pow(value[0]/value[1], energy[0]/(energy[1]-energy[0]))
		}
		d.energy, d.value = append(d.energy, 0), append(d.value, math.Max(first, smallestEEPF))
	}
	for k, e := range energy {
		d.energy = append(d.energy, e)
		d.value = append(d.value, math.Max(value[k], smallestEEPF))
	}
	return d, d.normalise()
}

// normalise makes the integral of sqrt(E) f dE equal to 1, and the integrals that currents need.
func (d *Distribution) normalise() error {
	total := d.moment(0.5)
	if !(total > 0) || math.IsInf(total, 1) {
		return errors.New("probe: a distribution without particles")
	}
	last := len(d.energy) - 1
	for k := range d.value {
		d.value[k] /= total
	}
	d.retarded, d.beyond = make([]float64, last+1), make([]float64, last+1)
	for k := last - 1; k >= 0; k-- {
		h := d.energy[k+1] - d.energy[k]
		j0, j1 := exponentialCell(d.value[k], d.value[k+1], h)
		d.beyond[k] = d.beyond[k+1] + j0
		d.retarded[k] = d.retarded[k+1] + h*d.beyond[k+1] + j1
	}
	return nil
}

// exponentialCell returns the integrals of f and of x f over 0..h for an exponential from a to b.
func exponentialCell(a, b, h float64) (j0, j1 float64) {
	q := math.Log(a / b)
	if math.Abs(q) < 1e-3 {
		// The next terms are smaller by q^2.
		return h * (a + b) / 2 * (1 - q*q/12), h * h * (a + 2*b) / 6
	}
	j0 = h * (a - b) / q
	return j0, h * (j0 - h*b) / q
}

// moment is the integral of E^power f dE.
func (d *Distribution) moment(power float64) float64 {
	// Gauss-Legendre points of a cell; substituting E = s^2 takes the root at 0 away.
	points := [3]float64{0.5 - math.Sqrt(0.15), 0.5, 0.5 + math.Sqrt(0.15)}
	weights := [3]float64{5.0 / 18, 8.0 / 18, 5.0 / 18}
	sum := 0.0
	for k := range len(d.energy) - 1 {
		a, b := math.Sqrt(d.energy[k]), math.Sqrt(d.energy[k+1])
		for i, p := range points {
			s := a + (b-a)*p
			sum += weights[i] * (b - a) * 2 * math.Pow(s, 2*power+1) * d.inCell(k, s*s)
		}
	}
	return sum
}

// inCell is f at energy e in cell k.
func (d *Distribution) inCell(k int, e float64) float64 {
	part := (e - d.energy[k]) / (d.energy[k+1] - d.energy[k])
	return d.value[k] * math.Pow(d.value[k+1]/d.value[k], part)
}

// At is f at an energy [eV]; 0 beyond the grid.
func (d *Distribution) At(e float64) float64 {
	k, ok := d.cell(e)
	if !ok {
		return 0
	}
	return d.inCell(k, e)
}

// cell finds the cell of an energy by bisection.
func (d *Distribution) cell(e float64) (int, bool) {
	lo, hi := 0, len(d.energy)-1
	if !(e >= 0) || e >= d.energy[hi] {
		return 0, false
	}
	for hi-lo > 1 {
		if mid := (lo + hi) / 2; d.energy[mid] <= e {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo, true
}

// Temperature is the effective temperature, two thirds of the mean energy [eV].
func (d *Distribution) Temperature() float64 { return 2.0 / 3 * d.moment(1.5) }

// energyGrid is a grid for analytic distributions: fine at 0 [units of scale].
func energyGrid(scale, end float64, cells int) []float64 {
	list := make([]float64, cells+1)
	for k := range list {
		u := float64(k) / float64(cells)
		list[k] = end * scale * u * (0.25 + 0.75*u)
	}
	return list
}

const (
	gridCells = 240
	// gridEnd is where an analytic distribution is cut, in units of its scale: exp(-40) is below
	// what any sweep resolves.
	gridEnd = 40
)

// Exponent is the distribution f ~ exp(-(E/E0)^kappa) of the effective temperature [eV]: kappa 1
// is Maxwell's, 2 Druyvesteyn's.
func Exponent(temperature, kappa float64) (*Distribution, error) {
	// <E> = E0 Gamma(5/(2 kappa))/Gamma(3/(2 kappa)).
	ratio := math.Gamma(2.5/kappa) / math.Gamma(1.5/kappa)
	e0 := 1.5 * temperature / ratio
	end := math.Pow(gridEnd, 1/kappa)
	energy := energyGrid(e0, end, gridCells)
	value := make([]float64, len(energy))
	for k, e := range energy {
		value[k] = math.Exp(-math.Pow(e/e0, kappa))
	}
	return NewDistribution(energy, value)
}

// TwoTemperatures is the sum of two Maxwellians: the part hot of the density has the temperature
// warm, the rest cold [eV].
func TwoTemperatures(cold, warm, hot float64) (*Distribution, error) {
	energy := energyGrid(math.Max(cold, warm), gridEnd, 2*gridCells)
	value := make([]float64, len(energy))
	for k, e := range energy {
		value[k] = (1-hot)*math.Pow(cold, -1.5)*math.Exp(-e/cold) +
			hot*math.Pow(warm, -1.5)*math.Exp(-e/warm)
	}
	return NewDistribution(energy, value)
}

// electronScale is sqrt(2e/m), the speed of an electron of 1 eV [m/s].
func electronScale() float64 {
	return math.Sqrt(2 * phys.ElementaryCharge / phys.ElectronMass)
}

// Retarded is the electron current density over e n [m/s] to a tip at the retarding voltage u >= 0
// [V].
func (d *Distribution) Retarded(u float64) float64 {
	k, ok := d.cell(u)
	if !ok {
		return 0
	}
	h := d.energy[k+1] - u
	j0, j1 := exponentialCell(d.inCell(k, u), d.value[k+1], h)
	_ = j0
	return electronScale() / 4 * (d.retarded[k+1] + h*d.beyond[k+1] + j1)
}

// AttractedOML is the electron current density over e n [m/s] to a thin cylinder at the attracting
// voltage u >= 0 [V]: the average over directions of the impact parameter times the speed across,
//
//	(1/2 pi) < w + (v^2 + w^2)/v asin(v/sqrt(v^2 + w^2)) >, w^2 = 2 e u/m,
//
// which is sqrt(1/(2 pi)) times the textbook formula for a Maxwellian.
func (d *Distribution) AttractedOML(u float64) float64 {
	w := math.Sqrt(u)
	sum := 0.0
	for k := range len(d.energy) - 1 {
		a, b := d.energy[k], d.energy[k+1]
		// Simpson's rule in s = sqrt(E): dE sqrt(E) = 2 s^2 ds.
		sa, sb := math.Sqrt(a), math.Sqrt(b)
		sm := (sa + sb) / 2
		sum += (sb - sa) / 3 * (sa*sa*d.value[k]*across(sa, w) +
			4*sm*sm*d.inCell(k, sm*sm)*across(sm, w) + sb*sb*d.value[k+1]*across(sb, w))
	}
	return electronScale() * sum / (2 * math.Pi)
}

// across is w + (v^2 + w^2)/v asin(v/sqrt(v^2 + w^2)).
func across(v, w float64) float64 {
	if v == 0 {
		return 2 * w
	}
	return w + (v*v+w*w)/v*math.Atan2(v, w)
}
