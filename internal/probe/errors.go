package probe

import (
	"math"
	"slices"
)

// spread is the standard deviation of a list without its NaN, robust against the few resamplings
// whose fit went astray: half the distance between the quantiles of one standard deviation.
func spread(list []float64) float64 {
	list = slices.DeleteFunc(slices.Clone(list), func(x float64) bool {
		return math.IsNaN(x) || math.IsInf(x, 0)
	})
	n := len(list)
	if n < 8 {
		return math.NaN()
	}
	slices.Sort(list)
	at := func(p float64) float64 {
		x := p * float64(n-1)
		i := min(int(x), n-2)
		return list[i] + (x-float64(i))*(list[i+1]-list[i])
	}
	// The quantiles of so few are a little too close.
	return (at(0.84134) - at(0.15866)) / 2 * (1 + 0.5/float64(n))
}

// way is a second way to a quantity.
type way struct {
	key, label string
	at         int // in derived
	of         func(s *smoothed) float64
}

func ways() []way {
	return []way{
		{
			"plasma_potential_zero_V", "plasma potential, zero of the second derivative", isPlasma,
			func(s *smoothed) float64 { return s.zero },
		},
		{
			"plasma_potential_steepest_V", "plasma potential, maximum of the first derivative",
			isPlasma, func(s *smoothed) float64 { return s.steepest },
		},
		{
			"plasma_potential_crossing_V", "plasma potential, intersecting slopes", isPlasma,
			func(s *smoothed) float64 { return s.crossing },
		},
		{
			"electron_density_integral_m3", "electron density, integral of the EEPF", isDensity,
			func(s *smoothed) float64 { return s.density },
		},
		{
			"electron_temperature_integral_eV", "electron temperature, integral of the EEPF",
			isTemperature, func(s *smoothed) float64 { return s.temperature },
		},
	}
}

// quantityUnits are those of derived.
func quantityUnits() [5]string { return [5]string{"1/m3", "1/m3", "eV", "V", "V"} }

func quantityLabels() [5]string {
	return [5]string{
		"electron density", "ion density", "electron temperature", "plasma potential",
		"floating potential",
	}
}

// agreement is how many joint errors two ways may differ before the rest counts as an error.
const agreement = 2.5

// tableError is the relative error of the table of ion currents, with that between its nodes.
const tableError = 2e-3

// combine makes the quantities: the best form, with the errors of noise, of the choice among forms
// and of what other ways disagree.
func (r *reduction) combine(central *smoothed) {
	var variance [5]float64
	near := r.fitNearKnee(r.candidates[0].fitted, r.used)
	for i := range variance {
		se := r.spreadOf(func(s *sample) float64 { return s.derived[i] })
		variance[i] = se*se + r.betweenForms(i) + r.saturationError(i, near)
		if i == isIons {
			variance[i] += math.Pow(tableError*r.center[i], 2)
		}
	}
	for _, w := range ways() {
		value := w.of(central)
		se := r.spreadOf(func(s *sample) float64 { return w.of(&s.smoothed) })
		// The difference is made in each resampling, since both ways share the noise.
		joint := r.spreadOf(func(s *sample) float64 { return w.of(&s.smoothed) - s.derived[w.at] })
		q := Quantity{value, se, quantityUnits()[w.at], ""}
		if math.IsNaN(value) || math.IsNaN(se) {
			q = unknown(q.Unit, "noise hides it")
		} else if excess := math.Abs(value-r.center[w.at]) - agreement*joint; excess > 0 {
			variance[w.at] += excess * excess
			r.caution("%s: %s differs from the fit by more than noise explains; the difference is "+
				"part of the error", quantityLabels()[w.at], w.label)
		}
		r.result.Methods = append(r.result.Methods, Method{w.key, w.label, q})
	}
	for i, key := range derivedKeys() {
		q := Quantity{r.center[i], math.Sqrt(variance[i]), quantityUnits()[i], ""}
		if math.IsNaN(q.Value) || math.IsNaN(q.SE) {
			q = unknown(q.Unit, "the sweep does not reach it")
		}
		r.result.Quantities = append(r.result.Quantities, Named{key, quantityLabels()[i], q})
	}
}

func (r *reduction) spreadOf(of func(s *sample) float64) float64 {
	list := make([]float64, len(r.samples))
	for i := range r.samples {
		list[i] = of(&r.samples[i])
	}
	return spread(list)
}

// betweenForms is the variance of a number among the forms, by their weights.
func (r *reduction) betweenForms(i int) float64 {
	sum := 0.0
	for k := range r.candidates {
		s := &r.candidates[k]
		if s.weight < 1e-3 {
			continue
		}
		x := derive(s.fitted, r.used)[i] - r.center[i]
		if !math.IsNaN(x) {
			sum += s.weight * x * x
		}
	}
	return sum
}
