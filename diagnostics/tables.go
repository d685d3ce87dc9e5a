package diagnostics

import (
	"math"

	"ionfall/internal/stats"
	"ionfall/internal/table"
	"ionfall/pic"
)

// xs returns the node positions [m].
func (r *Recorder) xs() []float64 {
	x := make([]float64, r.config.Cells+1)
	for j := range x {
		x[j] = r.config.Gap * float64(j) / float64(r.config.Cells)
	}
	return x
}

// phaseCenters returns the middle of each phase bin [rad].
func (r *Recorder) phaseCenters() []float64 {
	list := make([]float64, r.phases)
	for p := range list {
		list[p] = 2 * math.Pi * (float64(p) + 0.5) / float64(r.phases)
	}
	return list
}

// gridColumn names a grid quantity in the tables.
type gridColumn struct {
	quantity        int
	name, unit, doc string
}

// gridColumns lists what profiles and phases show; a species' file name of density and power is
// "electron" or the ion's name without its sign, which a column name cannot hold.
func (r *Recorder) gridColumns() []gridColumn {
	list := []gridColumn{
		{gridPotential, "potential_V", "V", "electric potential; the grounded electrode is 0"},
		{gridField, "field_Vpm", "V/m", "electric field along x"},
	}
	for i, rec := range r.species {
		first := gridFixed + gridPerSpecies*i
		list = append(list,
			gridColumn{
				first + gridDensity, ColumnName(rec.name) + "_density_m3", "1/m3",
				"number density of " + rec.name,
			},
		)
		if rec.charge != 0 {
			list = append(list, gridColumn{
				first + gridPower, "power_" + ColumnName(rec.name) + "_Wpm3", "W/m3",
				"power density from the field to " + rec.name,
			})
		}
		if i == 0 {
			list = append(list, gridColumn{
				first + gridEnergy, "electron_temperature_eV", "eV",
				"two thirds of the mean electron energy; 0 where no electron was seen",
			})
		}
	}
	return append(list, gridColumn{
		gridIonization, "ionization_rate_m3ps", "1/(m3 s)",
		"ionizing collisions of electrons",
	})
}

// ColumnName returns a species' name as it appears in column names: "e" is "electron", other
// names are spelled with "plus" and "minus" for their charge.
func ColumnName(species string) string {
	if species == "e" {
		return "electron"
	}
	name := ""
	for _, c := range species {
		switch c {
		case '+':
			name += "_plus"
		case '-':
			name += "_minus"
		default:
			name += string(c)
		}
	}
	return name
}

// SetWander sets the relative error that the slow wander of the particle number leaves in densities
// and what is proportional to them, the least that the tables state; for negative ions another one.
func (r *Recorder) SetWander(relative, negative float64) {
	r.wander, r.negative = relative, negative
}

// errors returns the standard errors of a grid quantity.
func (r *Recorder) errors(quantity int, v *stats.Vector) []float64 {
	se := v.StdErrs()
	follows := quantity == gridIonization || quantity >= gridFixed &&
		(quantity-gridFixed)%gridPerSpecies != gridEnergy
	if follows {
		least := r.wander
		of := (quantity - gridFixed) / gridPerSpecies
		if quantity > gridFixed && of > 0 && r.species[of].charge < 0 {
			least = math.Max(least, r.negative)
		}
		for i := range se {
			se[i] = math.Max(se[i], least*math.Abs(v.Mean[i]))
		}
	}
	return se
}

// Profiles returns the time averages on x.
func (r *Recorder) Profiles() *table.Table {
	t := table.New("profiles", "averages over time, on the nodes of the grid")
	t.AddFloat("x_m", "m", "distance from the powered electrode", r.xs())
	for _, c := range r.gridColumns() {
		v := r.averages.profiles[c.quantity]
		t.AddEstimate(c.name, c.unit, c.doc, v.Mean, r.errors(c.quantity, v))
	}
	return t
}

// Phases returns the averages on RF phase and x.
func (r *Recorder) Phases() *table.Table {
	t := table.New("phases", "averages by RF phase of the fundamental, on the nodes of the grid")
	xs, centers := r.xs(), r.phaseCenters()
	var phase, x []float64
	for _, p := range centers {
		for _, at := range xs {
			phase, x = append(phase, p), append(x, at)
		}
	}
	t.AddFloat("phase_rad", "rad", "middle of the phase bin", phase)
	t.AddFloat("x_m", "m", "distance from the powered electrode", x)
	for _, c := range r.gridColumns() {
		v := r.averages.phases[c.quantity]
		if c.name == "electron_temperature_eV" {
			value, se := r.phaseTemperature(c.quantity)
			t.AddEstimate(c.name, c.unit, c.doc, value, se)
			continue
		}
		t.AddEstimate(c.name, c.unit, c.doc, v.Mean, r.errors(c.quantity, v))
	}
	return t
}

// phaseTemperature returns the ratio of mean energy density to mean density by phase; the error
// adds both relative errors as if independent, which overstates it.
func (r *Recorder) phaseTemperature(quantity int) (value, se []float64) {
	energy := r.averages.phases[quantity]
	density := r.averages.phases[quantity-gridEnergy+gridDensity]
	value, se = make([]float64, len(energy.Mean)), make([]float64, len(energy.Mean))
	for i := range value {
		if density.Mean[i] <= 0 {
			continue
		}
		value[i] = 2.0 / 3 * energy.Mean[i] / density.Mean[i]
		a, b := energy.StdErr(i)/energy.Mean[i], density.StdErr(i)/density.Mean[i]
		se[i] = value[i] * math.Hypot(a, b)
		if energy.Mean[i] == 0 {
			se[i] = 0
		}
	}
	return value, se
}

// Waveforms returns what varies with RF phase alone.
func (r *Recorder) Waveforms() *table.Table {
	t := table.New("waveforms", "averages by RF phase of the fundamental")
	t.AddFloat("phase_rad", "rad", "middle of the phase bin", r.phaseCenters())
	for q, c := range []gridColumn{
		{0, "drive_V", "V", "voltage of the powered electrode"},
		{0, "current_Apm2", "A/m2", "current density into the powered electrode"},
		{0, "midgap_potential_V", "V", "potential in the middle of the gap"},
		{0, "sheath_powered_m", "m", "width of the powered sheath (Brinkmann 2007)"},
		{0, "sheath_grounded_m", "m", "width of the grounded sheath (Brinkmann 2007)"},
	} {
		v := r.averages.circuit[q]
		t.AddEstimate(c.name, c.unit, c.doc, v.Mean, v.StdErrs())
	}
	return t
}

// ElectronEnergy returns the electron energy probability function by region.
func (r *Recorder) ElectronEnergy() *table.Table {
	t := table.New("electron_energy", "electron energy probability function by region")
	var region []string
	var from, to, energy, width, f, se []float64
	for g, place := range r.regions {
		v := r.averages.eepf[g]
		for k := range v.Mean {
			region = append(region, place.Name)
			from, to = append(from, place.From), append(to, place.To)
			energy = append(energy, r.eBins.center(k))
			width = append(width, r.eBins.width(k))
			f, se = append(f, v.Mean[k]), append(se, v.StdErr(k))
		}
	}
	t.AddText("region", "part of the gap", region)
	t.AddFloat("x_from_m", "m", "start of the region", from)
	t.AddFloat("x_to_m", "m", "end of the region", to)
	t.AddFloat("energy_eV", "eV", "middle of the bin", energy)
	t.AddFloat("width_eV", "eV", "width of the bin", width)
	t.AddEstimate("eepf_eVm32", "eV^-3/2",
		"the integral of sqrt(E) times it over E is 1", f, se)
	return t
}

// IonEnergy returns the energy distributions of the ions at both electrodes.
func (r *Recorder) IonEnergy() *table.Table {
	t := table.New("ion_energy", "energy distribution of the ions that hit the electrodes")
	var electrode, species []string
	var energy, width, f, se []float64
	r.eachImpact(func(i int, wall pic.Wall, im *impactRecord) {
		v := r.averages.spectra[i][wall]
		for k := range v.Mean {
			electrode = append(electrode, wall.String())
			species = append(species, r.species[i].name)
			energy = append(energy, im.energies.center(k))
			w := im.energies.width(k)
			width = append(width, w)
			f, se = append(f, v.Mean[k]/w), append(se, v.StdErr(k)/w)
		}
	})
	t.AddText("electrode", "powered or grounded", electrode)
	t.AddText("species", "what arrives", species)
	t.AddFloat("energy_eV", "eV", "middle of the bin", energy)
	t.AddFloat("width_eV", "eV", "width of the bin", width)
	t.AddEstimate("flux_m2pseV", "1/(m2 s eV)", "flux per energy", f, se)
	return t
}

// IonAngle returns the distributions over energy and angle of incidence.
func (r *Recorder) IonAngle() *table.Table {
	t := table.New("ion_angle",
		"energy and angle to the surface normal of the ions that hit the electrodes")
	var electrode, species []string
	var energy, width, angle, f, se []float64
	const step = 90.0 / angleBins
	r.eachImpact(func(i int, wall pic.Wall, im *impactRecord) {
		v := r.averages.angles[i][wall]
		for k := range v.Mean {
			electrode = append(electrode, wall.String())
			species = append(species, r.species[i].name)
			e := k / angleBins
			w := im.coarse.width(e)
			energy = append(energy, im.coarse.center(e))
			width = append(width, w)
			angle = append(angle, (float64(k%angleBins)+0.5)*step)
			f, se = append(f, v.Mean[k]/(w*step)), append(se, v.StdErr(k)/(w*step))
		}
	})
	t.AddText("electrode", "powered or grounded", electrode)
	t.AddText("species", "what arrives", species)
	t.AddFloat("energy_eV", "eV", "middle of the energy bin", energy)
	t.AddFloat("width_eV", "eV", "width of the energy bin", width)
	t.AddFloat("angle_deg", "deg", "middle of the angle bin, 1 degree wide", angle)
	t.AddEstimate("flux_m2pseVdeg", "1/(m2 s eV deg)", "flux per energy and angle", f, se)
	return t
}

// eachImpact calls f for every ion species and wall.
func (r *Recorder) eachImpact(f func(i int, wall pic.Wall, im *impactRecord)) {
	for _, wall := range []pic.Wall{pic.Powered, pic.Grounded} {
		for i, rec := range r.species {
			if rec.impacts[wall] != nil {
				f(i, wall, rec.impacts[wall])
			}
		}
	}
}
