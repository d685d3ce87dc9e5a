package probe

import (
	"errors"
	"fmt"
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/table"
)

// Simulated is what a run says about the place of a probe.
type Simulated struct {
	// Density of electrons, and of positive ions less negative ones [1/m3].
	Density, Ions Quantity
	// Temperature is two thirds of the mean energy [eV], Potential against the grounded electrode.
	Temperature, Potential Quantity
	// Distribution of the region that holds the probe, and what region that is.
	Distribution *Distribution
	Region       string
	// Verdict of the run.
	Verdict string
}

// Place is where a tip is.
type Place struct {
	// Position of its middle from the powered electrode [m].
	Position float64
	// Across the planes of the electrodes, along the gap.
	Across bool
}

// Check says what is wrong with a place in the gap [m]: the key of the value, what was found, and
// what was expected.
func (p Place) Check(setup *Setup, gap float64) (key, got, want string) {
	mm := func(x float64) string { return fmt.Sprintf("%.4g mm", 1e3*x) }
	half := p.half(setup)
	switch {
	case math.IsNaN(p.Position):
		return "position", "nothing", "the distance of the tip from the powered electrode"
	case p.Across && setup.Length >= gap:
		return "tip_length", mm(setup.Length) + " across the gap", "less than the gap of " + mm(gap)
	case !(p.Position-half > 0 && p.Position+half < gap):
		return "position", mm(p.Position), fmt.Sprintf("from %s to %s, so that the tip is inside the "+
			"gap", mm(half), mm(gap-half))
	}
	return "", "", ""
}

// half is how far the tip reaches along the gap to each side [m].
func (p Place) half(setup *Setup) float64 {
	if p.Across {
		return setup.Length / 2
	}
	return setup.Radius
}

// NewSimulated averages the tables of a run (profiles and electron_energy) over the place of a tip.
func NewSimulated(profiles, energies *table.Table, place Place, setup *Setup) (*Simulated, error) {
	x, err := profiles.Floats("x_m")
	if err != nil {
		return nil, err
	}
	if len(x) < 2 {
		return nil, errors.New("profiles: fewer than two positions")
	}
	weights := placeWeights(x, place.Position, place.half(setup))
	var failed error
	mean := func(name, unit string) Quantity {
		value, err1 := profiles.Floats(name)
		se, err2 := profiles.Floats(name + "_se")
		if err := errors.Join(err1, err2); err != nil {
			failed = errors.Join(failed, err)
			return unknown(unit, "not in the run")
		}
		q := Quantity{Unit: unit}
		for k, w := range weights {
			// Errors of neighbours are correlated: they are averaged like the values.
			q.Value, q.SE = q.Value+w*value[k], q.SE+w*se[k]
		}
		return q
	}
	s := &Simulated{
		Density: mean("electron_density_m3", "1/m3"), Temperature: mean("electron_temperature_eV", "eV"),
		Potential: mean("potential_V", "V"),
	}
	s.Ions = positiveIons(profiles, mean)
	if failed != nil {
		return nil, failed
	}
	return s, s.distribution(energies, place.Position)
}

// positiveIons sums the densities of all positive ions.
func positiveIons(profiles *table.Table, mean func(name, unit string) Quantity) Quantity {
	sum := Quantity{Unit: "1/m3"}
	for _, c := range profiles.Columns {
		const tail = "_plus_density_m3"
		if n := len(c.Name) - len(tail); n > 0 && c.Name[n:] == tail {
			q := mean(c.Name, "1/m3")
			sum.Value, sum.SE = sum.Value+q.Value, sum.SE+q.SE
		}
	}
	return sum
}

// placeWeights are those of linear interpolation, averaged over the tip.
func placeWeights(x []float64, at, half float64) []float64 {
	const parts = 21
	w := make([]float64, len(x))
	for i := range parts {
		p := at + half*(2*float64(i)/(parts-1)-1)
		k := 0
		for k < len(x)-2 && x[k+1] < p {
			k++
		}
		part := math.Min(math.Max((p-x[k])/(x[k+1]-x[k]), 0), 1)
		w[k] += (1 - part) / parts
		w[k+1] += part / parts
	}
	return w
}

// distribution takes the smallest region that holds the place, or the nearest.
func (s *Simulated) distribution(t *table.Table, at float64) error {
	region, err0 := t.Texts("region")
	from, err1 := t.Floats("x_from_m")
	to, err2 := t.Floats("x_to_m")
	energy, err3 := t.Floats("energy_eV")
	value, err4 := t.Floats("eepf_eVm32")
	if err := errors.Join(err0, err1, err2, err3, err4); err != nil {
		return err
	}
	best, least := -1, math.Inf(1)
	for k := range region {
		away := math.Max(0, math.Max(from[k]-at, at-to[k]))
		if size := 1e3*away + to[k] - from[k]; size < least {
			best, least = k, size
		}
	}
	if best < 0 {
		return errors.New("electron_energy: no region")
	}
	var e, v []float64
	for k := range region {
		if region[k] == region[best] && from[k] == from[best] && !math.IsNaN(value[k]) {
			e, v = append(e, energy[k]), append(v, value[k])
		}
	}
	s.Region = fmt.Sprintf("%s (%.4g to %.4g mm)", region[best], 1e3*from[best], 1e3*to[best])
	var err error
	s.Distribution, err = NewDistribution(e, v)
	return err
}

// synthetic is the current that a probe would draw in the simulated plasma.
type synthetic struct {
	s          *Simulated
	setup      *Setup
	rf         float64 // [V]
	saturation float64
	attracted  []float64 // at equal steps of the root of the voltage up to attractTo
	attractTo  float64
}

// newSynthetic prepares the current. The enhancement above the plasma potential is that of orbital
// motion times a factor, since it depends on the probe.
func newSynthetic(s *Simulated, setup *Setup, rf, saturation, top float64) *synthetic {
	y := &synthetic{s: s, setup: setup, rf: rf, saturation: saturation}
	y.attractTo = math.Max(top-s.Potential.Value, 1) + 6*s.Temperature.Value + 2*rf
	const nodes = 120
	for k := range nodes + 1 {
		root := math.Sqrt(y.attractTo) * float64(k) / nodes
		y.attracted = append(y.attracted, s.Distribution.AttractedOML(root*root))
	}
	return y
}

// plasma is a point in which the synthetic current is evaluated.
type plasma struct{ density, ions, temperature, potential float64 }

func (y *synthetic) central() plasma {
	return plasma{
		y.s.Density.Value, y.s.Ions.Value, y.s.Temperature.Value, y.s.Potential.Value,
	}
}

// current at a voltage of the tip [A]. The distribution is stretched to the temperature.
func (y *synthetic) current(v float64, p plasma) float64 {
	stretch := p.temperature / y.s.Distribution.Temperature()
	charge := phys.ElementaryCharge * y.setup.Area()
	rho := y.setup.Radius / DebyeLength(p.density, p.temperature)
	tau := y.setup.ionRatio(p.temperature)
	steady := func(v float64) float64 {
		u := p.potential - v
		if u <= 0 {
			at := y.attracted[0]
			more := interpolate(y.attracted, math.Sqrt(-u/stretch/y.attractTo)) - at
			return charge * p.density * math.Sqrt(stretch) * (at + y.saturation*more)
		}
		electrons := p.density * math.Sqrt(stretch) * y.s.Distribution.Retarded(u/stretch)
		ions := p.ions * y.setup.ionFlux(p.temperature) * WarmCurrent(tau, rho, u/p.temperature)
		return charge * (electrons - ions)
	}
	if y.rf <= 0 {
		return steady(v)
	}
	sum := 0.0
	for k := range rfNodes {
		sum += steady(v + y.rf*math.Cos(math.Pi*(float64(k)+0.5)/rfNodes))
	}
	return sum / rfNodes
}

// with is the current and its standard error from those of the simulated quantities.
func (y *synthetic) with(v float64) (current, se float64) {
	c := y.central()
	current = y.current(v, c)
	d, t, pot := c, c, c
	d.density += y.s.Density.SE
	d.ions += y.s.Ions.SE
	t.temperature += y.s.Temperature.SE
	pot.potential += y.s.Potential.SE
	var sum float64
	for _, p := range []plasma{d, t, pot} {
		x := y.current(v, p) - current
		sum += x * x
	}
	return current, math.Sqrt(sum)
}

// floating is where the synthetic current is 0 [V], with its error.
func (y *synthetic) floating() Quantity {
	root := func(p plasma) float64 {
		lo, hi := p.potential-40*p.temperature, p.potential
		if y.current(lo, p) > 0 {
			return math.NaN()
		}
		for range 50 {
			if mid := (lo + hi) / 2; y.current(mid, p) > 0 {
				hi = mid
			} else {
				lo = mid
			}
		}
		return (lo + hi) / 2
	}
	c := y.central()
	q := Quantity{Value: root(c), Unit: "V"}
	t, pot := c, c
	t.temperature += y.s.Temperature.SE
	pot.potential += y.s.Potential.SE
	q.SE = math.Hypot(root(t)-q.Value, root(pot)-q.Value)
	if math.IsNaN(q.Value) {
		return unknown("V", "the simulated distribution reaches beyond the ions' current")
	}
	return q
}
