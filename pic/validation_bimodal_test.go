package pic

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// radioSheath is a discharge with a plasma kept up in the middle and ions that meet no gas, at a
// frequency at which they need several periods to cross the sheaths.
type radioSheath struct {
	plasma        sustained
	config        Config
	settle, count int // periods
	bins          int // of the phase
	on            bool
	field         []float64 // at the powered wall, by step of the period [V/m]
	potential     []float64 // at the nodes, mean [V]
	// phases are mean potentials by ion move of the period.
	phases [][]float64
	// sheathV is the potential of mid-gap against each wall, by step of the period.
	sheathV [2][]float64
	// electrons and charge are node numbers by phase bin.
	electrons, charge [][]float64
	// arrivals at the powered wall and the sum of their energies [eV], by ion move of the period.
	arrivals, energy []float64
	squares          float64 // sum of all their squared energies [eV^2]
}

func newRadioSheath(mass float64, settle, count int) *radioSheath {
	const density, cells, perCell, steps, every = 1.5e15, 96, 100, 400, 8
	r := &radioSheath{
		plasma: sustained{electron: 3, rate: 2e7, from: 0.25, to: 0.75},
		settle: settle, count: count, bins: 20,
		field: make([]float64, steps), potential: make([]float64, cells+1),
		energy: make([]float64, steps/every), arrivals: make([]float64, steps/every),
	}
	ion := Species{Name: "X+", Charge: 1, Mass: mass, Every: every}
	r.config = Config{
		Gap: 0.03, Cells: cells, Period: 1 / 27.12e6, StepsPerPeriod: steps,
		Scheme: EnergyConserving, Chunks: 2, Seed: 9, Species: []Species{electrons(), ion},
		Drive:  Drive{Tones: []Tone{{Harmonic: 1, Amplitude: 300}}},
		Weight: density * 0.5 * 0.03 / (cells * perCell),
	}
	for w := range r.sheathV {
		r.sheathV[w] = make([]float64, steps)
	}
	for range steps / every {
		r.phases = append(r.phases, make([]float64, cells+1))
	}
	for range r.bins {
		r.electrons = append(r.electrons, make([]float64, cells+1))
		r.charge = append(r.charge, make([]float64, cells+1))
	}
	return r
}

// run lets the discharge settle and then averages over periods.
func (r *radioSheath) run(t *testing.T) {
	t.Helper()
	s := mustNew(t, r.config)
	r.plasma.load(t, s, r.config.Cells*100)
	s.SetWorkers(1)
	watch(s, &spy{
		due: func(int64) bool { return r.on }, reduce: r.frame, step: r.circuit,
		hits: func(i, _ int, hits []Hit) { r.hit(s, i, hits) },
	})
	steps := r.config.StepsPerPeriod
	for n := range (r.settle + r.count) * steps {
		r.on = n >= r.settle*steps
		r.plasma.step(t, s)
	}
}

func (r *radioSheath) frame(f *Frame, _, _ int) {
	part := int(f.Step % int64(len(r.field)))
	r.field[part] += f.E[0] / float64(r.count)
	bin, move := part*r.bins/len(r.field), part*len(r.phases)/len(r.field)
	for j := range f.Phi {
		r.electrons[bin][j] += f.Number[0][j]
		r.charge[bin][j] += f.Number[1][j]
		r.potential[j] += f.Phi[j] / float64(r.count*len(r.field))
		r.phases[move][j] += f.Phi[j] * float64(len(r.phases)) / float64(r.count*len(r.field))
	}
}

func (r *radioSheath) circuit(c Circuit) {
	if r.on {
		part := c.Step % int64(len(r.field))
		r.sheathV[Powered][part] += (c.MidGap - c.Voltage) / float64(r.count)
		r.sheathV[Grounded][part] += c.MidGap / float64(r.count)
	}
}

func (r *radioSheath) hit(s *Simulation, i int, hits []Hit) {
	if i == 0 {
		return
	}
	r.plasma.count(hits)
	move := int(s.workers[0].step%int64(len(r.field))) / s.species[1].Every
	for _, h := range hits {
		if r.on && h.Wall == Powered {
			r.arrivals[move]++
			e := s.species[1].energyPer / phys.ElementaryCharge * h.VX * h.VX
			r.energy[move] += e
			r.squares += e * e
		}
	}
}

// harmonics returns mean and the first harmonics of samples of a period.
func harmonics(y []float64, most int) (mean float64, c []complex128) {
	n := float64(len(y))
	for _, v := range y {
		mean += v / n
	}
	for m := 1; m <= most; m++ {
		var re, im float64
		for k, v := range y {
			sin, cos := math.Sincos(2 * math.Pi * float64(m*k) / n)
			re, im = re+2*v*cos/n, im+2*v*sin/n
		}
		c = append(c, complex(re, im))
	}
	return mean, c
}

// swing returns the range of a sum of harmonics over a period.
func swing(c []complex128) float64 {
	low, high := math.Inf(1), math.Inf(-1)
	for k := range 3600 {
		sum := 0.0
		for m, a := range c {
			sin, cos := math.Sincos(2 * math.Pi * float64((m+1)*k) / 3600)
			sum += real(a)*cos + imag(a)*sin
		}
		low, high = math.Min(low, sum), math.Max(high, sum)
	}
	return high - low
}

// edge returns the electron edge in node spacings from node 0 (R. P. Brinkmann, J. Appl. Phys.
// 102, 093303 (2007)): the positive charge between wall and edge is the excess up to mid-gap.
func edge(electrons, positive []float64) float64 {
	half := len(electrons)/2 + 1
	missing := 0.0
	for j := 1; j < half; j++ {
		missing += 0.5 * (positive[j-1] + positive[j] - electrons[j-1] - electrons[j])
	}
	for j := 1; j < half; j++ {
		cell := 0.5 * (positive[j-1] + positive[j])
		if missing <= cell {
			return float64(j-1) + missing/cell
		}
		missing -= cell
	}
	return math.NaN()
}

// width is the split of the ion energies and what theory makes of the measured sheath [eV].
type width struct {
	measured, firstOrder, published, withMean float64
	mean, wave                                float64 // of the sheath voltage [V]
}

// evaluate takes the averages at the powered wall.
func (r *radioSheath) evaluate(t *testing.T) width {
	t.Helper()
	omega := 2 * math.Pi / r.config.Period
	var q width
	mean, voltage := harmonics(r.sheathV[Powered], 1)
	q.mean, q.wave = mean, cmplx.Abs(voltage[0])
	widest, average := 0.0, 0.0
	for p := range r.bins {
		r.charge[p][0] *= 2 // a wall's node has half a cell
		r.electrons[p][0] *= 2
		s := r.config.CellSize() * edge(r.electrons[p], r.charge[p])
		widest, average = math.Max(widest, s), average+s/float64(r.bins)
	}
	impact, arrivals := make([]float64, len(r.energy)), 0.0
	for k := range impact {
		impact[k] = r.energy[k] / r.arrivals[k]
		arrivals += r.arrivals[k]
	}
	_, split := harmonics(impact, 3)
	q.measured = swing(split)
	speed := math.Sqrt(2 * phys.ElementaryCharge * mean / r.config.Species[1].Mass)
	_, field := harmonics(r.field, 5)
	for m := range field {
		field[m] /= complex(0, float64(m+1)*omega)
	}
	q.firstOrder = speed * swing(field)
	q.published = 8. / 3 * q.wave / (omega * widest) * speed
	q.withMean = 8. / 3 * q.wave / (omega * average) * speed
	t.Logf("sheath %.1f V mean, %.1f V wave, edge %.3g mm mean, %.3g mm at most; %g ions; "+
		"transit %.2g periods", mean, q.wave, 1e3*average, 1e3*widest, arrivals,
		3*widest/speed/r.config.Period)
	return q
}

// Goal: ions that need several periods to cross a sheath arrive with two energies, split as theory
// says for each mass. Method: a discharge at 27 MHz and 300 V in which ions meet nothing, the
// plasma kept up in the middle half of the gap. An ion's energy at impact is a function of the
// phase of arrival; its largest and least value over the phase are where the distribution peaks,
// and they can be read without the spread from the places of birth.
//
// To first order in 1/omega the split is exactly v times the range of the integral of E dt, with
// E the field at the wall and v = sqrt(2 e Vbar/M): integration by parts of the work e E(x,t) v dt
// along the path leaves its end at the wall. What is left out is of relative size dE/(4 e Vbar),
// 4 % for helium: 5 % are allowed.
//
// The published formula, k e Vt/(omega s) sqrt(2 e Vbar/M), has k = 8/3 for the profile of Child
// and Langmuir, and 2 for a uniform field. By the exact form, k = 2 E s/Vt, twice the
// capacitance of the sheath in units of eps0/s, for which the collisionless theory of M. A.
// Lieberman, IEEE Trans. Plasma Sci. 16, 638 (1988), has 1.23 to 1.6 with s the largest width,
// to which the ions see a field. A result nearer to 8/3 than to 2 passes: within 12.5 %.
func TestValidationBimodalEnergies(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	ions := []struct {
		name           string
		mass           float64
		settle, counts int
	}{{"He+", 6.6465e-27, 150, 150}, {"Ar+", 6.6335e-26, 500, 300}}
	if !*validate {
		ions = ions[:1]
	}
	for _, ion := range ions {
		r := newRadioSheath(ion.mass, ion.settle, ion.counts)
		r.run(t)
		q := r.evaluate(t)
		row := validation.Row{
			Section:  "ion energies behind a collisionless high-frequency sheath",
			Quantity: "width between the peaks from the field at the wall, " + ion.name, Unit: "eV",
			Reference: q.firstOrder, Ours: q.measured, Status: "exact",
			Source: "work on the ion to first order in 1/omega", Limit: 0.05,
			LimitKind: validation.Relative, Seed: r.config.Seed,
			Note: fmt.Sprintf("27.12 MHz, mean sheath voltage %.0f V, wave %.0f V", q.mean, q.wave),
		}
		second := row
		second.Quantity = "width between the peaks by the published formula, " + ion.name
		second.Reference, second.Limit, second.Status = q.published, 0.125, "memory"
		second.Source = "P. Benoit-Cattin and L.-C. Bernard, J. Appl. Phys. 39, 5723 (1968); " +
			"E. Kawamura et al., Plasma Sources Sci. Technol. 8, R45 (1999)"
		second.Note = fmt.Sprintf("factor 8/3 and s the largest width of the sheath; the measured "+
			"factor is %.2f so, and %.2f with the mean width", 8./3*q.measured/q.published,
			8./3*q.measured/q.withMean)
		record(t, row, second)
	}
}
