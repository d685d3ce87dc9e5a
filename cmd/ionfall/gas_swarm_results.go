package main

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"
	"sync"

	"ionfall/internal/progress"
	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/internal/table"
	"ionfall/mcc"
)

// inParallel calls work for every field, on all cores: fields side by side, and where there are
// fewer of them than cores, several workers a field. after is called for one field at a time.
func (j *swarmJob) inParallel(work func(i, workers int), after func(i, done int)) {
	cores := j.cores
	if cores == 0 {
		cores = runtime.NumCPU()
	}
	side := min(cores, len(j.fields))
	next := make(chan int)
	var group sync.WaitGroup
	var mu sync.Mutex
	done := 0
	for range side {
		group.Go(func() {
			for i := range next {
				work(i, max(1, cores/side))
				mu.Lock()
				done++
				after(i, done)
				mu.Unlock()
			}
		})
	}
	for i := range j.fields {
		next <- i
	}
	close(next)
	group.Wait()
}

// coefficient is a result of a swarm under its name in tables and in JSON.
type coefficient struct {
	name, unit, label, doc string
	of                     func(r *mcc.SwarmResult) stats.Estimate
}

// coefficients are all but the rates of single processes.
func coefficients() []coefficient {
	return []coefficient{
		{
			"mean_energy_eV", "eV", "mean energy", "mean energy of a particle",
			func(r *mcc.SwarmResult) stats.Estimate { return r.MeanEnergy },
		},
		{
			"flux_drift_mps", "m/s", "flux drift", "mean velocity along the force",
			func(r *mcc.SwarmResult) stats.Estimate { return r.FluxDrift },
		},
		{
			"bulk_drift_mps", "m/s", "bulk drift", "velocity of the centre of the swarm",
			func(r *mcc.SwarmResult) stats.Estimate { return r.BulkDrift },
		},
		{
			"mobility_cm2pVps", "cm2/(V s)", "reduced mobility",
			"flux drift over field at 273.15 K and 101325 Pa", mobility,
		},
		{
			"diffusion_longitudinal_pmps", "1/(m s)", "N x diffusion, along",
			"bulk diffusion coefficient along the field times the gas density",
			func(r *mcc.SwarmResult) stats.Estimate { return r.DiffusionLongitudinal },
		},
		{
			"diffusion_transverse_pmps", "1/(m s)", "N x diffusion, across",
			"bulk diffusion coefficient across the field times the gas density",
			func(r *mcc.SwarmResult) stats.Estimate { return r.DiffusionTransverse },
		},
		{
			"ionization_rate_m3ps", "m3/s", "ionization rate",
			"rate coefficient of ionization",
			func(r *mcc.SwarmResult) stats.Estimate { return seen(r.Ionization) },
		},
		{
			"townsend_m2", "m2", "growth per length / N",
			"first Townsend coefficient over the gas density",
			func(r *mcc.SwarmResult) stats.Estimate { return seen(r.Townsend) },
		},
	}
}

// seen is the estimate of a rate. Where nothing happened, there is no error to tell: the rate is
// small, but nobody knows how small.
func seen(e stats.Estimate) stats.Estimate {
	if e.Mean == 0 {
		e.StdErr = math.NaN()
	}
	return e
}

// cell is an estimate on a terminal.
func cell(e stats.Estimate) string {
	if e.Mean == 0 && math.IsNaN(e.StdErr) {
		return "none seen"
	}
	return progress.WithError(e.Mean, e.StdErr)
}

// mobility is not known without a field.
func mobility(r *mcc.SwarmResult) stats.Estimate {
	if r.Field == 0 {
		return stats.Estimate{Mean: math.NaN(), StdErr: math.NaN()}
	}
	return r.Mobility
}

// swarmJSON is a field in JSON.
type swarmJSON struct {
	Field                 float64                `json:"field_Td"`
	MeanEnergy            store.Value            `json:"mean_energy_eV"`
	FluxDrift             store.Value            `json:"flux_drift_mps"`
	BulkDrift             store.Value            `json:"bulk_drift_mps"`
	Mobility              store.Value            `json:"mobility_cm2pVps"`
	DiffusionLongitudinal store.Value            `json:"diffusion_longitudinal_pmps"`
	DiffusionTransverse   store.Value            `json:"diffusion_transverse_pmps"`
	Ionization            store.Value            `json:"ionization_rate_m3ps"`
	Townsend              store.Value            `json:"townsend_m2"`
	Rates                 map[string]store.Value `json:"rates"`
	Warnings              []string               `json:"warnings,omitempty"`
}

func (j *swarmJob) json(r *mcc.SwarmResult) swarmJSON {
	out := swarmJSON{
		Field: r.Field, Rates: map[string]store.Value{}, Warnings: j.warnings(r),
	}
	places := []*store.Value{
		&out.MeanEnergy, &out.FluxDrift, &out.BulkDrift, &out.Mobility,
		&out.DiffusionLongitudinal, &out.DiffusionTransverse, &out.Ionization, &out.Townsend,
	}
	for i, c := range coefficients() {
		e := c.of(r)
		*places[i] = store.Value{Value: e.Mean, SE: e.StdErr, Unit: c.unit}
	}
	for _, rate := range r.Rates {
		e := seen(rate.Rate)
		out.Rates[rate.Process] = store.Value{Value: e.Mean, SE: e.StdErr, Unit: "m3/s"}
	}
	return out
}

const (
	// muchExtrapolated is the part of collisions outside the tables that is worth a warning.
	muchExtrapolated = 1e-3
	// muchDrift is the drift during the measurement, in standard errors, that chance hardly gives.
	muchDrift = 4
)

// warnings are the reasons not to trust a result.
func (j *swarmJob) warnings(r *mcc.SwarmResult) []string {
	var list []string
	if !r.Run.Reached {
		list = append(list, "the accuracy asked for was not reached")
	}
	if r.Extrapolated > muchExtrapolated {
		list = append(list, fmt.Sprintf("%.2g of the collisions are beyond what the sources of "+
			"the cross sections cover", r.Extrapolated))
	}
	if math.Abs(r.Run.Drift) > muchDrift {
		list = append(list, fmt.Sprintf("the mean energy still drifts, by %.1f standard errors",
			r.Run.Drift))
	}
	return list
}

// fieldsAcross is how many fields stand beside each other on a terminal.
const fieldsAcross = 3

func (j *swarmJob) text(done []mcc.SwarmResult) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s in %s, set %s, gas of %g K\n", j.species, j.gas.Name, j.gas.Set,
		j.temperature)
	for part := range slices.Chunk(done, fieldsAcross) {
		head := []string{"", "E/N"}
		for i := range part {
			head = append(head, fmt.Sprintf("%g Td", part[i].Field))
		}
		rows := [][]string{head}
		for _, c := range coefficients() {
			row := []string{c.label, c.unit}
			for i := range part {
				row = append(row, cell(c.of(&part[i])))
			}
			rows = append(rows, row)
		}
		for k, rate := range part[0].Rates {
			row := []string{"rate of " + rate.Process, "m3/s"}
			for i := range part {
				row = append(row, cell(seen(part[i].Rates[k].Rate)))
			}
			rows = append(rows, row)
		}
		b.WriteString("\n" + align(rows))
	}
	for i := range done {
		for _, w := range j.warnings(&done[i]) {
			fmt.Fprintf(&b, "warning: %g Td: %s\n", done[i].Field, w)
		}
	}
	return b.String()
}

// swarmTables are swarm.parquet and eepf.parquet.
func swarmTables(done []mcc.SwarmResult) []*table.Table {
	t := table.New("swarm", "transport coefficients, a row a reduced field")
	column := func(of func(r *mcc.SwarmResult) float64) []float64 {
		list := make([]float64, len(done))
		for i := range done {
			list[i] = of(&done[i])
		}
		return list
	}
	add := func(name, unit, doc string, of func(r *mcc.SwarmResult) stats.Estimate) {
		t.AddEstimate(name, unit, doc,
			column(func(r *mcc.SwarmResult) float64 { return of(r).Mean }),
			column(func(r *mcc.SwarmResult) float64 { return of(r).StdErr }))
	}
	t.AddFloat("field_Td", "Td", "reduced field E/N",
		column(func(r *mcc.SwarmResult) float64 { return r.Field }))
	for _, c := range coefficients() {
		add(c.name, c.unit, c.doc, c.of)
	}
	used := map[string]int{}
	for k, rate := range done[0].Rates {
		name := "rate_" + columnPart(rate.Process)
		if used[name]++; used[name] > 1 {
			name += fmt.Sprintf("_%d", used[name])
		}
		add(name+"_m3ps", "m3/s", "rate coefficient of "+rate.Process,
			func(r *mcc.SwarmResult) stats.Estimate { return seen(r.Rates[k].Rate) })
	}
	t.AddFloat("extrapolated", "", "part of the collisions beyond what the tables cover",
		column(func(r *mcc.SwarmResult) float64 { return r.Extrapolated }))
	reached := make([]int64, len(done))
	for i := range done {
		if done[i].Run.Reached {
			reached[i] = 1
		}
	}
	t.AddInt("accuracy_reached", "", "1 if the accuracy asked for was reached", reached)
	return []*table.Table{t, distributions(done)}
}

// columnPart is a name of a process as a part of the name of a column.
func columnPart(name string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9',
			strings.ContainsRune("+-*()", r):
			return r
		}
		return '_'
	}, name)
}

// distributions are the energy distributions of all fields below each other.
func distributions(done []mcc.SwarmResult) *table.Table {
	var field, energy, width, eepf, se []float64
	for i := range done {
		d := &done[i].Energies
		for k := range d.EEPF {
			field = append(field, done[i].Field)
			energy = append(energy, d.CenterEV(k))
			width = append(width, d.EdgesEV[k+1]-d.EdgesEV[k])
		}
		eepf, se = append(eepf, d.EEPF...), append(se, d.StdErr...)
	}
	t := table.New("eepf", "energy distributions of the swarms")
	t.AddFloat("field_Td", "Td", "reduced field E/N", field)
	t.AddFloat("energy_eV", "eV", "middle of the bin", energy)
	t.AddFloat("width_eV", "eV", "width of the bin", width)
	t.AddEstimate("eepf_eVm32", "eV^-3/2",
		"energy probability function; the integral of sqrt(E) times it is 1", eepf, se)
	return t
}

// meta says in the tables what they were made from.
func (j *swarmJob) meta() map[string]string {
	return map[string]string{
		"program": "ionfall " + versionText(), "gas": j.gas.Name, "set": j.gas.Set,
		"cross_sections_sha256": j.gas.SHA256, "species": j.species,
		"temperature_K": fmt.Sprint(j.temperature), "accuracy": fmt.Sprint(j.accuracy),
		"seed": fmt.Sprint(j.seed),
	}
}
