package run

import (
	"fmt"
	"math"
	"path/filepath"
	"runtime"
	"strings"

	"ionfall/diagnostics"
	"ionfall/internal/bib"
	"ionfall/internal/phys"
	"ionfall/internal/report"
	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/internal/table"
	"ionfall/pic"
)

// value turns an estimate into a leaf of the results.
func value(e stats.Estimate, unit string) store.Value {
	return store.Value{Value: e.Mean, SE: e.StdErr, Unit: unit}
}

// results collects every scalar.
func (m *machine) results() map[string]any {
	energy, flux, energyFlux := map[string]any{}, map[string]any{}, map[string]any{}
	fractions, percentiles, sheath := map[string]any{}, map[string]any{}, map[string]any{}
	for _, wall := range []pic.Wall{pic.Powered, pic.Grounded} {
		e, f, w, part := map[string]any{}, map[string]any{}, map[string]any{}, map[string]any{}
		enter := func(name string, im diagnostics.Impact) {
			e[name] = value(im.MeanEnergyEV, "eV")
			f[name] = value(m.atLeast(im.Flux), "1/(m2 s)")
			w[name] = value(m.atLeast(im.EnergyFlux), "W/m2")
			above := map[string]any{}
			for k, t := range m.plan.Case.IonEnergyThresholds {
				above[thresholdName(t)] = value(im.Above[k], "")
			}
			part[name] = above
		}
		all := m.rec.AllImpacts(wall)
		enter("all", all)
		for i, sp := range m.sim.Species() {
			if sp.Charge > 0 {
				enter(sp.Name, m.rec.Impact(i, wall))
			}
		}
		at := wall.String()
		energy[at], flux[at], energyFlux[at], fractions[at] = e, f, w, part
		percentiles[at] = map[string]any{
			"p05": value(all.Percentiles[0], "eV"), "p50": value(all.Percentiles[1], "eV"),
			"p95": value(all.Percentiles[2], "eV"),
		}
		sheath[at] = value(m.rec.Sheath(wall), "m")
	}
	r := map[string]any{
		"ion_mean_energy_eV": energy, "ion_flux_m2ps": flux, "ion_energy_flux_Wpm2": energyFlux,
		"ion_energy_percentile_eV": percentiles, "sheath_width_m": sheath,
		"power_Wpm2":                     m.powers(),
		"gas_heating_Wpm2":               m.gasHeating(),
		"plasma_potential_V":             value(m.rec.PlasmaPotential(), "V"),
		"electron_density_center_m3":     value(m.atLeast(m.rec.CenterDensity()), "1/m3"),
		"electron_density_peak_m3":       value(m.atLeast(m.rec.PeakDensity()), "1/m3"),
		"electron_temperature_center_eV": value(m.rec.CenterTemperatureEV(), "eV"),
	}
	if len(m.plan.Case.IonEnergyThresholds) > 0 {
		r["ion_fraction_above"] = fractions
	}
	m.filmResults(r)
	m.neutralResults(r)
	m.meterResults(r)
	return r
}

// thresholdName is a threshold as a key: 20eV, 12p5eV (a point would divide a path).
func thresholdName(energyEV float64) string {
	return strings.ReplaceAll(fmt.Sprintf("%geV", energyEV), ".", "p")
}

// powers returns the mean powers that the species take from the field and the drive delivers.
func (m *machine) powers() map[string]any {
	n := m.control.Averaged.Periods
	total := m.series(func(r *Row) float64 { return r.TotalPower }, n)
	powers := map[string]any{"total": value(m.atLeast(stats.Mean(total)), "W/m2")}
	for i, sp := range m.sim.Species() {
		if sp.Charge == 0 {
			continue // the field gives them nothing
		}
		name := sp.Name
		if i == 0 {
			name = "electron"
		}
		series := m.series(func(r *Row) float64 { return r.Power[i] }, n)
		powers[name] = value(m.atLeast(stats.Mean(series)), "W/m2")
	}
	return powers
}

// filmResults relates the ions to the atoms that grow, where the input gives the growth.
func (m *machine) filmResults(r map[string]any) {
	film := m.plan.Case.Film
	if film == nil {
		return
	}
	atoms := film.GrowthRate * film.AtomDensity // [1/(m2 s)]
	energy, ions := map[string]any{}, map[string]any{}
	for _, wall := range m.plan.substrates() {
		im := m.rec.AllImpacts(wall)
		e, flux := m.atLeast(im.EnergyFlux), m.atLeast(im.Flux)
		perAtom := 1 / (atoms * phys.ElementaryCharge)
		energy[wall.String()] = store.Value{
			Value: e.Mean * perAtom, SE: e.StdErr * perAtom, Unit: "eV",
		}
		ions[wall.String()] = store.Value{Value: flux.Mean / atoms, SE: flux.StdErr / atoms}
	}
	r["film_energy_per_atom_eV"], r["film_ions_per_atom"] = energy, ions
}

// provenance says where the numbers come from.
func (m *machine) provenance() map[string]any {
	c := &m.control
	n := c.Numerics
	batches, length := m.rec.Batches()
	return map[string]any{
		"program": "ionfall", "version": m.options.version(), "go": runtime.Version(),
		"platform": runtime.GOOS + "/" + runtime.GOARCH, "kernels": m.sim.Config().Kernels.Name,
		"cores": m.options.cores(), "seed": m.plan.Case.Seed,
		"input_sha256": m.plan.InputSHA256(), "cross_sections": m.plan.crossSections(),
		"wall_s": c.Wall, "cpu_s": c.CPU, "particle_steps": c.Moved,
		"periods": c.Periods, "averaged_periods": c.Averaged.Periods,
		"batches": batches, "batch_periods": length,
		"correlation": "errors from batch means; neighbouring batches' correlation widens them",
		"numerics": map[string]any{
			"cells": n.Cells, "steps_per_period": n.StepsPerPeriod,
			"particles_per_cell": n.ParticlesPerCell, "scheme": n.Scheme,
			"ion_substeps": n.IonSubsteps, "chunks": n.Chunks, "reasons": c.Reasons,
		},
		"ionization_energy_sharing": m.plan.sharingName(),
		"electron_scattering":       m.plan.scatteringName(),
		"accuracy_reached":          c.Reached, "budget_spent": c.Spent,
		"caution": "a simulated value is no interlock setting",
	}
}

// references lists the publications that the run relied on.
func (m *machine) references() []store.Reference {
	why := [][2]string{
		{"birdsall-1991", "particle-in-cell with Monte Carlo collisions"},
		{"vahedi-surendra-1995", "collisions of electrons and ions with the gas"},
		{"skullerud-1968", "null collisions"},
		{"brinkmann-2007", "sheath width"},
		{"salmon-2011", "random numbers"},
		{"blackman-vigna-2021", "random numbers"},
		{"flyvbjerg-petersen-1989", "standard errors of correlated averages"},
	}
	if m.control.Numerics.scheme() == pic.EnergyConserving {
		why = append(why, [2]string{"lewis-1970", "energy-conserving field"},
			[2]string{"powis-kaganovich-2024", "cells of several Debye lengths"})
	}
	if m.plan.Case.CoulombCollisions {
		why = append(why, [2]string{"nanbu-1997", "collisions of electrons with each other"})
	}
	why = append(why, m.plan.reactorReferences()...)
	var list []store.Reference
	for _, w := range why {
		if e, ok := bib.Lookup(w[0]); ok {
			list = append(list, store.Reference{Key: e.Key, Citation: e.Citation, Why: w[1]})
		}
	}
	for _, g := range m.plan.Gases {
		list = append(list, sources(g.Name, g.Electron)...)
	}
	list = append(list, m.plan.heavySources()...)
	return append(list, m.plan.pairSources()...)
}

// historyTable is one row a period.
func (m *machine) historyTable() *table.Table {
	t := table.New("history", "one row an RF period")
	n := len(m.history)
	period, electrons, ions := make([]int64, n), make([]int64, n), make([]int64, n)
	stage, event := make([]string, n), make([]string, n)
	for i, r := range m.history {
		period[i], electrons[i], ions[i] = int64(i+1), r.Electrons, r.Ions
		stage[i], event[i] = r.Stage, r.Event
	}
	t.AddInt("period", "", "RF period", period)
	t.AddText("stage", "pilot, settling or averaging", stage)
	t.AddInt("electrons", "", "simulated electrons at the end of the period", electrons)
	t.AddInt("ions", "", "simulated ions at the end of the period", ions)
	add := func(name, unit, doc string, f func(r *Row) float64) {
		t.AddFloat(name, unit, doc, m.series(f, n))
	}
	add("weight_pm2", "1/m2", "real particles per area that a simulated one stands for",
		func(r *Row) float64 { return r.Weight })
	add("ion_content_pm2", "1/m2", "ions in the gap per area",
		func(r *Row) float64 { return r.Content })
	for _, wall := range []pic.Wall{pic.Powered, pic.Grounded} {
		add("ion_flux_"+wall.String()+"_m2ps", "1/(m2 s)", "ions that hit the electrode",
			func(r *Row) float64 { return r.Flux[wall] })
		add("ion_mean_energy_"+wall.String()+"_eV", "eV", "their mean energy; 0 where none came",
			func(r *Row) float64 { return r.Energy[wall] })
	}
	for i, sp := range m.sim.Species() {
		add("power_"+diagnostics.ColumnName(sp.Name)+"_Wpm2", "W/m2", "taken from the field",
			func(r *Row) float64 { return r.Power[i] })
	}
	add("power_total_Wpm2", "W/m2", "delivered by the drive",
		func(r *Row) float64 { return r.TotalPower })
	add("gas_heating_Wpm2", "W/m2", "left in the gas by collisions of ions and fast neutrals",
		func(r *Row) float64 { return r.GasHeating })
	add("field_energy_Jpm2", "J/m2", "at the end of the period",
		func(r *Row) float64 { return r.FieldEnergy })
	t.AddText("event", "what the program did to the particles, if anything", event)
	return t
}

// write puts every file into the folder and makes it whole.
func (m *machine) write() (*store.Summary, error) {
	checks := m.trust()
	s := &store.Summary{
		Verdict: verdict(checks), Checks: checks, Results: m.results(),
		Provenance: m.provenance(), References: m.references(),
	}
	meta := map[string]string{
		"program": "ionfall " + m.options.version(), "input_sha256": m.plan.InputSHA256(),
		"verdict": s.Verdict, "seed": fmt.Sprint(m.plan.Case.Seed),
	}
	number, effect := m.negativeError(true)
	m.rec.SetWander(math.Hypot(m.wander(), effect), number)
	for _, t := range []*table.Table{
		m.rec.Profiles(), m.rec.Phases(), m.rec.IonEnergy(), m.rec.IonAngle(),
		m.rec.ElectronEnergy(), m.rec.Waveforms(), m.historyTable(),
	} {
		if err := m.folder.WriteTable(t, meta); err != nil {
			return nil, err
		}
	}
	if err := m.folder.WriteSummary(s, meta); err != nil {
		return nil, err
	}
	if err := m.save(); err != nil {
		return nil, err
	}
	if err := m.folder.WriteJSON("state.json", m.state()); err != nil {
		return nil, err
	}
	m.writePage()
	return s, m.folder.Commit()
}

// writePage writes the report. The results can do without it, and it can be made again.
func (m *machine) writePage() {
	r, err := report.OpenFolder(m.folder.Path(""), filepath.Base(m.folder.Dir()))
	var page []byte
	if err == nil {
		page, err = report.Page([]*report.Run{r})
	}
	if err == nil {
		err = m.folder.WriteFile(report.File, page)
	}
	if err != nil {
		m.options.log().Warn("the report was not written: make it with ionfall report",
			"error", err)
	}
}
