package probe

import (
	"errors"
	"fmt"
	"math"

	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/internal/table"
)

// Analyser is a planar retarding-field analyser behind an electrode.
type Analyser struct {
	// Grids before the collector, each with the open part Open of its area.
	Grids int
	Open  float64
	// Radius of the entrance [m]; 0 is not known, and then no flux is stated.
	Radius float64
	// Acceptance is the largest angle to the axis that passes [rad].
	Acceptance float64
	// Resolution is the full width at half maximum of what a single energy becomes [eV].
	Resolution float64
	// Potential of the electrode, from which retarding voltages count [V].
	Potential float64
}

// Transmission is the part of the ions within the acceptance that reach the collector: each grid
// lets its open part through. Grids whose holes are aligned by chance differ from it.
func (a *Analyser) Transmission() float64 { return math.Pow(a.Open, float64(a.Grids)) }

// Channel is the acceptance [rad] of a grid of holes as deep as thickness.
func Channel(diameter, thickness float64) float64 { return math.Atan2(diameter, thickness) }

// AngularSpread is the relative width of energies by the acceptance: ions are sorted by the part
// E cos^2 of their energy that is along the axis.
func (a *Analyser) AngularSpread() float64 { return math.Pow(math.Sin(a.Acceptance), 2) }

// Keys of the results of an analyser.
const (
	KeyIonFlux   = "ion_flux_m2ps"
	KeyIonEnergy = "ion_mean_energy_eV"
	KeyIonP05    = "ion_energy_p05_eV"
	KeyIonP50    = "ion_energy_p50_eV"
	KeyIonP95    = "ion_energy_p95_eV"
)

// AnalyserResult is a reduced set of retarding sweeps.
type AnalyserResult struct {
	Quantities []Named
	// Energy along the axis [eV]; Distribution normalised to 1 [1/eV], with its error.
	Energy, Distribution, SE []float64
	// Voltage against the electrode [V] and Current of the collector [A].
	Voltage, Current []float64
	Window           float64 // of the derivative [eV]
	Cautions, Notes  []string
}

// ReadCollector reads a file of retarding sweeps: like ReadSweeps, but with a current that falls as
// the voltage rises.
func ReadCollector(name string, src []byte, columns Columns) (*File, error) {
	r, f, err := readChecked(name, src, columns)
	if err != nil {
		return nil, err
	}
	low, high, span := ends(f.Sweeps)
	if math.Abs(low) < 2*math.Abs(high) {
		return nil, inputerr.List{{
			File: name, Line: r.headerLine, Key: "current",
			Got:  fmt.Sprintf("%.3g A at %.4g V and %.3g A at %.4g V", low, span[0], high, span[1]),
			Want: "a current that falls by more than half to the highest retarding voltage",
			Hint: "the sweep must go beyond the energy of most ions",
		}}
	}
	if low < 0 {
		for i := range f.Sweeps {
			for k := range f.Sweeps[i].Current {
				f.Sweeps[i].Current[k] *= -1
			}
		}
		f.Notes = append(f.Notes, "ion current is negative in the file, and was turned")
	}
	return f, nil
}

// ReduceAnalyser finds flux, mean and percentiles of the energy along the axis, and its
// distribution f ~ -dI/dV.
func ReduceAnalyser(sweeps []Sweep, a *Analyser, choices Choices) (*AnalyserResult, error) {
	d, err := clean(sweeps, &Setup{})
	if err != nil {
		return nil, err
	}
	grid, values := uniform(d.voltage, d.current)
	spacing := grid[1] - grid[0]
	r := &AnalyserResult{Current: values}
	for _, v := range grid {
		r.Voltage = append(r.Voltage, v-a.Potential)
	}
	// The noise of a falling curve: that of neighbours' differences, the same everywhere.
	pairs := make([]pair, len(grid))
	for k := range pairs {
		pairs[k] = pair{grid[k], values[k]}
	}
	noise := 1.4826 * median(absolutes(localResiduals(pairs)))
	base := baseline(values)
	if !(values[0]-base > 10*noise) {
		return nil, errors.New("the current does not fall by more than its noise")
	}
	width := math.Max(a.Resolution/2, (grid[len(grid)-1]-grid[0])/40)
	s, err := newSmoothing(width, spacing, len(grid))
	if err != nil {
		return nil, err
	}
	r.Window = s.width
	r.distribution(s, values, noise, base)
	r.scalars(a, noise, base, choices)
	r.judge(a, values, base, noise)
	return r, nil
}

// baseline is what is left of the current at the end.
func baseline(values []float64) float64 {
	n := len(values)
	return median(values[n-max(3, n/20):])
}

func (r *AnalyserResult) distribution(s *smoothing, values []float64, noise, base float64) {
	slope := s.filter.Apply(values, 1, s.spacing)
	total := values[0] - base
	gain := s.filter.Gain(1) / s.spacing
	for k, v := range r.Voltage {
		r.Energy = append(r.Energy, v)
		r.Distribution = append(r.Distribution, -slope[k]/total)
		r.SE = append(r.SE, gain*noise/total)
	}
}

// collectorScalars are flux, mean and percentiles of a falling curve.
func (r *AnalyserResult) collectorScalars(values []float64, base float64) [5]float64 {
	n := max(3, len(values)/60)
	top := 0.0
	// Few ions arrive with so little energy: the first points give the whole current.
	for _, i := range values[:n] {
		top += (i - base) / float64(n)
	}
	h := r.Voltage[1] - r.Voltage[0]
	sum := 0.0
	for k := range len(values) - 1 {
		sum += h * (values[k] + values[k+1] - 2*base) / 2
	}
	out := [5]float64{top, r.Voltage[0] + sum/top}
	for i, part := range [3]float64{0.05, 0.5, 0.95} {
		out[2+i] = r.fallsBelow(values, base+(1-part)*top)
	}
	return out
}

// fallsBelow is the voltage at which the current comes to a level, in the middle between the first
// time below and the last above: noise crosses more than once.
func (r *AnalyserResult) fallsBelow(values []float64, level float64) float64 {
	cross := func(k int) float64 {
		part := (values[k] - level) / (values[k] - values[k+1])
		return r.Voltage[k] + part*(r.Voltage[k+1]-r.Voltage[k])
	}
	first, last := math.NaN(), math.NaN()
	for k := range len(values) - 1 {
		if values[k] >= level && values[k+1] < level {
			if math.IsNaN(first) {
				first = cross(k)
			}
			last = cross(k)
		}
	}
	return (first + last) / 2
}

// scalars with errors from noise drawn anew on the smoothed curve.
func (r *AnalyserResult) scalars(a *Analyser, noise, base float64, choices Choices) {
	center := r.collectorScalars(r.Current, base)
	n := choices.Resamplings
	if n == 0 {
		n = DefaultResamplings
	}
	var samples [5][]float64
	drawn := make([]float64, len(r.Current))
	for b := range n {
		stream := rng.Key{
			Seed: choices.Seed, Purpose: rng.Resampling, Step: uint64(b), Species: 1,
		}.Stream()
		for k := range drawn {
			drawn[k] = r.Current[k] + noise*stream.Normal()
		}
		for i, x := range r.collectorScalars(drawn, baseline(drawn)) {
			samples[i] = append(samples[i], x)
		}
	}
	// A point is as wide as the steps of the voltage.
	step := (r.Voltage[1] - r.Voltage[0]) / math.Sqrt(12)
	keys := [5]string{KeyIonFlux, KeyIonEnergy, KeyIonP05, KeyIonP50, KeyIonP95}
	labels := [5]string{
		"ion flux in the acceptance", "mean energy along the axis", "5 % arrive below",
		"50 % arrive below", "95 % arrive below",
	}
	for i, key := range keys {
		q := Quantity{center[i], math.Hypot(spread(samples[i]), step), "eV", ""}
		if i == 0 {
			area := math.Pi * a.Radius * a.Radius
			scale := 1 / (phys.ElementaryCharge * area * a.Transmission())
			q = Quantity{scale * center[0], scale * spread(samples[0]), "1/(m2 s)", ""}
			if a.Radius == 0 {
				q = unknown("1/(m2 s)", "the radius of the entrance is not stated")
			}
		}
		if q.Reason == "" && math.IsNaN(q.Value+q.SE) {
			q = unknown(q.Unit, "the sweep does not reach it")
		}
		r.Quantities = append(r.Quantities, Named{key, labels[i], q})
	}
}

// judge adds cautions.
func (r *AnalyserResult) judge(a *Analyser, values []float64, base, noise float64) {
	if base > 0.05*values[0] && base > 5*noise {
		r.Cautions = append(r.Cautions, fmt.Sprintf("%.2g %% of the current is left at the highest "+
			"voltage: ions of more energy, or a leak; it was taken off", 100*base/values[0]))
	}
	if r.Voltage[0] > 0 {
		r.Cautions = append(r.Cautions, fmt.Sprintf("the sweep starts %.3g V above the electrode: "+
			"slower ions are not seen", r.Voltage[0]))
	}
	if spread := a.AngularSpread(); spread > 0.1 {
		r.Cautions = append(r.Cautions, fmt.Sprintf("ions up to %.3g degrees pass: energies along the "+
			"axis are up to %.2g %% below the energies", a.Acceptance*180/math.Pi, 100*spread))
	}
	r.Notes = append(r.Notes, fmt.Sprintf("transmission %.3g; derivative over a window of %.3g V",
		a.Transmission(), r.Window))
}

// Table of the distribution.
func (r *AnalyserResult) Table() *table.Table {
	t := table.New("analyser", "retarding-field analyser: current and energy distribution")
	t.AddFloat("voltage_V", "V", "retarding voltage against the electrode", r.Voltage)
	t.AddFloat("current_A", "A", "current of the collector", r.Current)
	t.AddFloat("energy_eV", "eV", "energy along the axis", r.Energy)
	t.AddEstimate("distribution_peV", "", "part of the ions per eV", r.Distribution, r.SE)
	return t
}
