package table

import (
	"slices"
	"testing"
)

// Goal: names in figures are short and tell apart what they name. Method: examples.
func TestShortNames(t *testing.T) {
	for _, c := range [][2][]string{
		{
			{"gas.pressure_Pa", "drive.tones.0.amplitude_V", "gap_m"},
			{"pressure", "amplitude", "gap"},
		},
		{
			{"drive.tones.0.amplitude", "drive.tones.1.amplitude"},
			{"tones 0 amplitude", "tones 1 amplitude"},
		},
		{{"numerics.particles_per_cell"}, {"particles per cell"}},
		{{"gap", "electrodes.powered.gap"}, {"gap", "powered gap"}},
	} {
		if got := ShortNames(c[0]); !slices.Equal(got, c[1]) {
			t.Errorf("%q: got %q, want %q", c[0], got, c[1])
		}
	}
	for name, want := range map[string]string{
		"ion_mean_energy_eV.grounded.all": "ion mean energy, grounded", "self_bias_V": "self bias",
		"power_Wpm2.total": "power", "ion_flux_m2ps.grounded.Ar+": "ion flux, grounded, Ar+",
	} {
		if got := ResultName(name); got != want {
			t.Errorf("%s: got %q, want %q", name, got, want)
		}
	}
}
