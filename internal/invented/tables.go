package invented

import (
	"math"
	"strings"

	"ionfall/internal/table"
)

func electrodes() []string { return []string{"grounded", "powered"} }

// tables has one of each, small.
func tables(o Options) []*table.Table {
	return []*table.Table{
		profiles(o.Ions), phases(), energies(o.Ions), angles(o.Ions), electronEnergies(), waves(),
		history(max(30, o.Periods)),
	}
}

func profiles(ions []string) *table.Table {
	const n = 31
	var x, bell, se []float64
	for i := range n {
		x = append(x, 0.001*float64(i))
		bell = append(bell, math.Sin(math.Pi*float64(i)/(n-1)))
		se = append(se, 0.02)
	}
	times := func(v []float64, f float64) []float64 {
		list := make([]float64, len(v))
		for i := range v {
			list[i] = v[i] * f
		}
		return list
	}
	t := table.New("profiles", "invented")
	t.AddFloat("x_m", "m", "place", x)
	t.AddEstimate("potential_V", "V", "potential", times(bell, 60), se)
	t.AddEstimate("electron_density_m3", "1/m3", "density", times(bell, 3e15), times(se, 1e15))
	for i, name := range ions {
		column := strings.NewReplacer("+", "_plus", "-", "_minus").Replace(name)
		t.AddEstimate(column+"_density_m3", "1/m3", "density",
			times(bell, 3e15/float64(i+1)), times(se, 1e15))
	}
	t.AddEstimate("ionization_rate_m3ps", "1/(m3 s)", "rate", times(bell, 1e20), times(se, 1e19))
	return t
}

func phases() *table.Table {
	var phase, x, field []float64
	for p := range 16 {
		for i := range 31 {
			phase = append(phase, 2*math.Pi*(float64(p)+0.5)/16)
			x = append(x, 0.001*float64(i))
			field = append(field, float64(15-i)*(1+math.Cos(phase[len(phase)-1])))
		}
	}
	t := table.New("phases", "invented")
	t.AddFloat("phase_rad", "rad", "phase", phase)
	t.AddFloat("x_m", "m", "place", x)
	t.AddEstimate("field_Vpm", "V/m", "field", field, make([]float64, len(field)))
	return t
}

func energies(ions []string) *table.Table {
	var electrode, species []string
	var energy, width, flux, se []float64
	for _, e := range electrodes() {
		for k, name := range ions {
			for i := range 60 {
				electrode, species = append(electrode, e), append(species, name)
				v := float64(i) + 0.5
				energy, width = append(energy, v), append(width, 1)
				f := 1e16 * math.Exp(-math.Pow((v-20-5*float64(k))/8, 2))
				if i > 50 {
					f = 0
				}
				flux, se = append(flux, f), append(se, f/20)
			}
		}
	}
	t := table.New("ion_energy", "invented")
	t.AddText("electrode", "which", electrode)
	t.AddText("species", "what", species)
	t.AddFloat("energy_eV", "eV", "middle", energy)
	t.AddFloat("width_eV", "eV", "width", width)
	t.AddEstimate("flux_m2pseV", "1/(m2 s eV)", "flux", flux, se)
	return t
}

func angles(ions []string) *table.Table {
	var electrode, species []string
	var energy, width, angle, flux []float64
	for _, e := range electrodes() {
		for _, name := range ions {
			for i := range 12 {
				for a := range 18 {
					electrode, species = append(electrode, e), append(species, name)
					energy, width = append(energy, 5*float64(i)+2.5), append(width, 5)
					angle = append(angle, 5*float64(a)+2.5)
					flux = append(flux, 1e15*math.Exp(-float64(i*a)/10))
				}
			}
		}
	}
	t := table.New("ion_angle", "invented")
	t.AddText("electrode", "which", electrode)
	t.AddText("species", "what", species)
	t.AddFloat("energy_eV", "eV", "middle", energy)
	t.AddFloat("width_eV", "eV", "width", width)
	t.AddFloat("angle_deg", "deg", "middle", angle)
	t.AddEstimate("flux_m2pseVdeg", "1/(m2 s eV deg)", "flux", flux, make([]float64, len(flux)))
	return t
}

func electronEnergies() *table.Table {
	var region []string
	var from, to, energy, width, f, se []float64
	for i := range 80 {
		e := 0.25 * (float64(i) + 0.5)
		region = append(region, "center")
		from, to = append(from, 0.01), append(to, 0.02)
		energy, width = append(energy, e), append(width, 0.25)
		f = append(f, math.Exp(-e/2.5)*2/math.SqrtPi*math.Pow(2.5, -1.5))
		se = append(se, 0.01*f[i])
	}
	t := table.New("electron_energy", "invented")
	t.AddText("region", "part", region)
	t.AddFloat("x_from_m", "m", "start", from)
	t.AddFloat("x_to_m", "m", "end", to)
	t.AddFloat("energy_eV", "eV", "middle", energy)
	t.AddFloat("width_eV", "eV", "width", width)
	t.AddEstimate("eepf_eVm32", "eV^-3/2", "function", f, se)
	return t
}

func waves() *table.Table {
	var phase, drive, se []float64
	for p := range 36 {
		phase = append(phase, 2*math.Pi*(float64(p)+0.5)/36)
		drive, se = append(drive, 120*math.Cos(phase[p])), append(se, 0)
	}
	t := table.New("waveforms", "invented")
	t.AddFloat("phase_rad", "rad", "phase", phase)
	t.AddEstimate("drive_V", "V", "voltage", drive, se)
	return t
}

func history(n int) *table.Table {
	var period, particles []int64
	var stage []string
	var flux []float64
	for i := range n {
		period, particles = append(period, int64(i+1)), append(particles, int64(1000+i%7))
		stage = append(stage, []string{"settling", "averaging"}[2*i/n])
		flux = append(flux, 1e18*(1-math.Exp(-float64(i)/float64(n/5))))
	}
	t := table.New("history", "invented")
	t.AddInt("period", "", "period", period)
	t.AddText("stage", "stage", stage)
	t.AddInt("electrons", "", "particles", particles)
	t.AddFloat("ion_flux_grounded_m2ps", "1/(m2 s)", "flux", flux)
	return t
}
