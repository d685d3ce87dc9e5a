package probe

import (
	"math"
	"strings"
	"testing"

	"ionfall/internal/table"
)

// runTables are profiles and distributions of an invented run: the density is a parabola.
func runTables() (profiles, energies *table.Table) {
	var x, n, nSE, t, tSE, v, vSE []float64
	for k := range 81 {
		at := 0.04 * float64(k) / 80
		x = append(x, at)
		n = append(n, 3e15*(1-math.Pow((at-0.02)/0.02, 2)))
		nSE, t, tSE = append(nSE, 2e13), append(t, 3), append(tSE, 0.01)
		v, vSE = append(v, 60), append(vSE, 0.05)
	}
	profiles = table.New("profiles", "")
	profiles.AddFloat("x_m", "m", "", x)
	profiles.AddEstimate("electron_density_m3", "1/m3", "", n, nSE)
	profiles.AddEstimate("Ar_plus_density_m3", "1/m3", "", n, nSE)
	profiles.AddEstimate("electron_temperature_eV", "eV", "", t, tSE)
	profiles.AddEstimate("potential_V", "V", "", v, vSE)
	var region []string
	var from, to, energy, f []float64
	for k := range 200 {
		e := (float64(k) + 0.5) * 0.3
		region, energy = append(region, "center"), append(energy, e)
		from, to = append(from, 0.018), append(to, 0.022)
		f = append(f, math.Exp(-e/3))
	}
	energies = table.New("electron_energy", "")
	energies.AddText("region", "", region)
	energies.AddFloat("x_from_m", "m", "", from)
	energies.AddFloat("x_to_m", "m", "", to)
	energies.AddFloat("energy_eV", "eV", "", energy)
	energies.AddFloat("eepf_eVm32", "eV^-3/2", "", f)
	return profiles, energies
}

// Goal: a sweep drawn in a simulated plasma agrees with it, and one of another plasma does not.
// Method: the same tables; then a density that is 10 % lower.
func TestCompare(t *testing.T) {
	profiles, energies := runTables()
	setup := argonSetup()
	s, err := NewSimulated(profiles, energies, Place{Position: 0.02}, setup)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "density", s.Density.Value, 3e15, 1e-3)
	near(t, "temperature of the distribution", s.Distribution.Temperature(), 3, 2e-3)
	sweeps := Draw(s, setup, 300, 2, Noise{Floor: 5e-4, Relative: 5e-3, Seed: 2})
	r, err := Reduce(sweeps, setup, Choices{Seed: 1, Resamplings: 30})
	if err != nil {
		t.Fatal(err)
	}
	c := Compare(r, s, setup)
	for i := range c.Rows {
		if z := c.Rows[i].Sigma(); !(math.Abs(z) < 4) {
			t.Errorf("%s: %+v against %+v", c.Rows[i].Key, c.Rows[i].Measured, c.Rows[i].Simulated)
		}
	}
	if !(c.Aligned < 1.5) || c.Points < 200 {
		t.Errorf("currents differ by %.2g joint errors at %d points", c.Aligned, c.Points)
	}
	less := *s
	less.Density.Value *= 0.9
	if v := Compare(r, &less, setup).Verdict; !strings.Contains(v, "disagree") ||
		!strings.Contains(v, "electron density 0.") {
		t.Errorf("verdict %q, want disagreement in density", v)
	}
	less.Verdict = "fail"
	if v := Compare(r, &less, setup).Verdict; !strings.HasPrefix(v, "No verdict") {
		t.Errorf("verdict %q of a failed run", v)
	}
}

// Goal: quantities are averages over the tip. Method: a tip along the gap over a parabola.
func TestAcrossTheGap(t *testing.T) {
	profiles, energies := runTables()
	setup := argonSetup()
	setup.Length = 0.02
	s, err := NewSimulated(profiles, energies, Place{Position: 0.02, Across: true}, setup)
	if err != nil {
		t.Fatal(err)
	}
	// The mean of 1 - (x/2)^2 over -1..1; the ends of the sum count whole.
	near(t, "density", s.Density.Value, 3e15*(1-1.0/12), 0.01)
}

// Goal: places that cannot be are refused. Method: outside, too near a wall, too long.
func TestPlace(t *testing.T) {
	setup := argonSetup()
	for want, p := range map[string]Place{
		"position":   {Position: 0.05},
		"tip_length": {Position: 0.005, Across: true},
		"":           {Position: 0.003},
	} {
		if key, _, _ := p.Check(setup, 0.008); key != want {
			t.Errorf("%+v: complaint about %q, want %q", p, key, want)
		}
	}
}

// Goal: mistakes in a description are told with their place. Method: parts of the message.
func TestDescriptionBad(t *testing.T) {
	for text, want := range map[string]string{
		"":                            "p.yaml: got an empty file",
		"probes: []":                  "p.yaml:1:9: probes: got no such list",
		"probes:\n  - {sweep: a.csv}": `did you mean "sweeps"`,
		"probes:\n  - {sweeps: a.csv, gas: Ar, tip_length: 8 mm, tip_radius: 50}": "p.yaml:2:60: " +
			`probes.0.tip_radius: got "50", want a length such as 40 mm`,
		"analysers:\n  - {sweeps: a.csv, grids: 0, open_fraction: 80 %}": "a whole number from 1 to 10",
		"probes: [": "p.yaml:",
	} {
		_, err := ParseDescription("p.yaml", []byte(text))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: got %v, want %q", text, err, want)
		}
	}
}
