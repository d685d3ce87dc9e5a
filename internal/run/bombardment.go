package run

import (
	"cmp"
	"fmt"

	"ionfall/crosssections"
	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/mcc"
	"ionfall/pic"
)

// neutralResults adds what fast neutrals bring to the electrodes, where they are followed, and what
// ions and neutrals bring together.
func (m *machine) neutralResults(r map[string]any) {
	if m.plan.fastThreshold() == 0 {
		return
	}
	energy, flux, energyFlux := map[string]any{}, map[string]any{}, map[string]any{}
	allEnergy, allFlux := map[string]any{}, map[string]any{}
	for _, wall := range []pic.Wall{pic.Powered, pic.Grounded} {
		e, f, w := map[string]any{}, map[string]any{}, map[string]any{}
		if all, ok := m.rec.NeutralImpacts(wall); ok {
			e["all"] = value(all.MeanEnergyEV, "eV")
			f["all"] = value(m.atLeast(all.Flux), "1/(m2 s)")
			w["all"] = value(m.atLeast(all.EnergyFlux), "W/m2")
		}
		for i, sp := range m.sim.Species() {
			if sp.Charge == 0 {
				im := m.rec.Impact(i, wall)
				e[sp.Name] = value(im.MeanEnergyEV, "eV")
				f[sp.Name] = value(m.atLeast(im.Flux), "1/(m2 s)")
				w[sp.Name] = value(m.atLeast(im.EnergyFlux), "W/m2")
			}
		}
		both := m.rec.EnergeticImpacts(wall)
		at := wall.String()
		energy[at], flux[at], energyFlux[at] = e, f, w
		allEnergy[at] = value(m.atLeast(both.EnergyFlux), "W/m2")
		allFlux[at] = value(m.atLeast(both.Flux), "1/(m2 s)")
	}
	r["neutral_mean_energy_eV"], r["neutral_flux_m2ps"] = energy, flux
	r["neutral_energy_flux_Wpm2"] = energyFlux
	r["energetic_energy_flux_Wpm2"], r["energetic_flux_m2ps"] = allEnergy, allFlux
	r["fast_neutral_threshold_eV"] = store.Value{Value: m.plan.fastThreshold(), Unit: "eV"}
}

// heavySources lists where the cross sections of ions and fast neutrals come from, estimates among
// them.
func (p *Plan) heavySources() []store.Reference {
	var list []store.Reference
	gas := p.backgrounds()
	for _, h := range p.heavy {
		for _, b := range gas {
			var of []crosssections.Process
			for _, q := range mcc.Collisions(p.settings(h), gas, b) {
				of = append(of, *q)
			}
			list = append(list, sources(b.Gas.Name, of)...)
		}
	}
	return list
}

// sources lists where cross sections with a gas come from.
func sources(gas string, processes []crosssections.Process) []store.Reference {
	var list []store.Reference
	for _, p := range processes {
		key := cmp.Or(p.Source.Bib, p.File, p.Name)
		why := fmt.Sprintf("cross section of %s: %s (%s)", gas, p.Name, p.Source.Status)
		list = append(list, store.Reference{Key: key, Citation: p.Source.Citation, Why: why})
	}
	return list
}

// pairSources lists where the reactions of charged species with each other come from.
func (p *Plan) pairSources() []store.Reference {
	var list []store.Reference
	for _, q := range p.pairs() {
		key := cmp.Or(q.Source.Bib, q.File, q.Name)
		why := fmt.Sprintf("%v: %s (%s)", q.Kind, q.Name, q.Source.Status)
		list = append(list, store.Reference{Key: key, Citation: q.Source.Citation, Why: why})
	}
	return list
}

// gasHeating is the power that collisions of ions and fast neutrals leave in the gas.
func (m *machine) gasHeating() store.Value {
	series := m.series(func(r *Row) float64 { return r.GasHeating }, m.control.Averaged.Periods)
	return value(m.atLeast(stats.Mean(series)), "W/m2")
}
