package probe

import (
	"math"

	"ionfall/internal/phys"
)

// Shapes of the distribution that a characteristic is fitted with.
const (
	Maxwell     = "Maxwellian"
	Druyvesteyn = "Druyvesteyn"
	General     = "general exponent"
	TwoTemp     = "two temperatures"
)

// shape is the electron current of a distribution per A e n, at any voltage.
type shape struct {
	// flux at the plasma potential, a quarter of the mean speed [m/s].
	flux float64
	// temperature is the effective one [eV].
	temperature float64
	// part is the current at a retarding voltage over that at the plasma potential, enhanced the
	// same at an attracting one, for orbital motion.
	part, enhanced func(u float64) float64
	// coldest is the lowest slope temperature [eV]: it sets the window of derivatives.
	coldest float64
}

// maxwellFlux is sqrt(e T/(2 pi m)) [m/s].
func maxwellFlux(temperature float64) float64 {
	return math.Sqrt(phys.ElementaryCharge * temperature / (2 * math.Pi * phys.ElectronMass))
}

func maxwellShape(temperature float64) shape {
	return shape{
		flux: maxwellFlux(temperature), temperature: temperature, coldest: temperature,
		part:     func(u float64) float64 { return math.Exp(-u / temperature) },
		enhanced: func(u float64) float64 { return OMLCylinder(u / temperature) },
	}
}

// twoShape mixes Maxwellians: the part hot of the density has the temperature warm.
func twoShape(cold, warm, hot float64) shape {
	a, b := (1-hot)*maxwellFlux(cold), hot*maxwellFlux(warm)
	x, y := a/(a+b), b/(a+b)
	return shape{
		flux: a + b, temperature: (1-hot)*cold + hot*warm, coldest: cold,
		part: func(u float64) float64 {
			return x*math.Exp(-u/cold) + y*math.Exp(-u/warm)
		},
		enhanced: func(u float64) float64 {
			return x*OMLCylinder(u/cold) + y*OMLCylinder(u/warm)
		},
	}
}

const (
	// shapeNodes of the tables of a distribution, and their ends in units of the temperature.
	shapeNodes       = 240
	retardEnd        = 24
	attractNodes     = 60
	attractEnd       = 6
	smallestRetarded = 1e-30
)

// unitShape holds the tables of a distribution of temperature 1 eV.
type unitShape struct {
	flux     float64
	logPart  []float64 // logarithms, at equal steps of u
	enhanced []float64 // at equal steps of sqrt(u)
}

// newUnitShape tabulates the current of the distribution f ~ exp(-(E/E0)^kappa).
func newUnitShape(kappa float64) (*unitShape, error) {
	d, err := Exponent(1, kappa)
	if err != nil {
		return nil, err
	}
	s := &unitShape{flux: d.Retarded(0)}
	for k := range shapeNodes + 1 {
		part := d.Retarded(retardEnd*float64(k)/shapeNodes) / s.flux
		s.logPart = append(s.logPart, math.Log(math.Max(part, smallestRetarded)))
	}
	at := d.AttractedOML(0)
	for k := range attractNodes + 1 {
		root := math.Sqrt(attractEnd) * float64(k) / attractNodes
		s.enhanced = append(s.enhanced, d.AttractedOML(root*root)/at)
	}
	return s, nil
}

// scaled is the shape at a temperature [eV].
func (s *unitShape) scaled(temperature float64) shape {
	return shape{
		flux: s.flux * math.Sqrt(temperature), temperature: temperature, coldest: temperature,
		part: func(u float64) float64 {
			return math.Exp(interpolate(s.logPart, u/temperature/retardEnd))
		},
		enhanced: func(u float64) float64 {
			return interpolate(s.enhanced, math.Sqrt(u/temperature/attractEnd))
		},
	}
}

// interpolate is linear between equal steps of 0..1, and beyond 1 goes on as at the end.
func interpolate(table []float64, at float64) float64 {
	x := at * float64(len(table)-1)
	i := min(max(int(x), 0), len(table)-2)
	return table[i] + (x-float64(i))*(table[i+1]-table[i])
}
