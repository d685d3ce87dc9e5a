package table

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// sound returns a table that has one column of each kind and nothing wrong.
func sound() *Table {
	t := New("ion_energy", "energy of the ions at the electrodes")
	t.AddText("electrode", "powered or grounded", []string{"powered", "grounded"})
	t.AddFloat("energy_eV", "eV", "centre of the bin", []float64{0.5, 1.5})
	t.AddEstimate("flux_m2pseV", "1/(m2 s eV)", "flux per energy", []float64{1, 2},
		[]float64{0.1, math.NaN()})
	t.AddInt("count", "", "ions counted", []int64{100, 3})
	return t
}

func TestSoundTable(t *testing.T) {
	s := sound()
	if err := s.Validate(); err != nil {
		t.Fatal(err)
	}
	if s.Rows() != 2 {
		t.Errorf("%d rows, want 2", s.Rows())
	}
	c, ok := s.Column("flux_m2pseV_se")
	if !ok || c.Unit != "1/(m2 s eV)" || c.Doc != "standard error of flux_m2pseV" {
		t.Errorf("standard error: %+v", c)
	}
	if v, err := s.Floats("energy_eV"); err != nil || !slices.Equal(v, []float64{0.5, 1.5}) {
		t.Errorf("energy_eV: %v, %v", v, err)
	}
	if v, err := s.Ints("count"); err != nil || !slices.Equal(v, []int64{100, 3}) {
		t.Errorf("count: %v, %v", v, err)
	}
	if v, err := s.Texts("electrode"); err != nil || v[1] != "grounded" {
		t.Errorf("electrode: %v, %v", v, err)
	}
}

func TestLookupErrors(t *testing.T) {
	s := sound()
	_, missing := s.Floats("energy_J")
	_, text := s.Floats("electrode")
	_, number := s.Texts("energy_eV")
	_, whole := s.Ints("energy_eV")
	for got, want := range map[error]string{
		missing: `ion_energy: no column "energy_J", there are: electrode, energy_eV, ` +
			`flux_m2pseV, flux_m2pseV_se, count`,
		text:   `ion_energy: column "electrode" holds texts, want numbers`,
		number: `ion_energy: column "energy_eV" holds numbers, want texts`,
		whole:  `ion_energy: column "energy_eV" holds numbers, want whole numbers`,
	} {
		if got == nil || got.Error() != want {
			t.Errorf("got %v, want %s", got, want)
		}
	}
}

// TestContractNames: every column name of the results folder states the unit it is written with.
func TestContractNames(t *testing.T) {
	for name, want := range map[string]string{
		"x_m": "m", "potential_V": "V", "field_Vpm": "V/m", "electron_density_m3": "1/m3",
		"Ar+_density_m3": "1/m3", "electron_temperature_eV": "eV",
		"ionization_rate_m3ps": "1/(m3 s)", "power_electron_Wpm3": "W/m3", "phase_rad": "rad",
		"width_eV": "eV", "flux_m2pseV_se": "1/(m2 s eV)", "angle_deg": "deg",
		"flux_m2pseVdeg": "1/(m2 s eV deg)", "x_from_m": "m", "eepf_eVm32_se": "eV^-3/2",
		"current_Apm2": "A/m2", "sheath_powered_m": "m", "ion_energy_flux_Wpm2": "W/m2",
		"ion_mean_energy_eV.grounded.all": "eV", "ion_flux_m2ps.powered.Ar+_se": "1/(m2 s)",
		"gas.pressure_Pa": "Pa", "value": "", "se": "", "species": "", "m": "", "_m": "",
		"verdict": "", "electron_count": "", "energy_ev": "", "room": "",
	} {
		if got := UnitOf(name); got != want {
			t.Errorf("%s: unit %q, want %q", name, got, want)
		}
		c := Column{Name: name, Unit: want, Doc: "doc", Float: []float64{}}
		if errs := c.check(); len(errs) > 0 {
			t.Errorf("%s: %v", name, errs)
		}
	}
}

// TestSwarmNames: coefficients of swarms state their units; that of a rate coefficient is the
// one that its column says.
func TestSwarmNames(t *testing.T) {
	for name, unit := range map[string]string{
		"field_Td": "Td", "ionization_rate_m3ps": "m3/s", "townsend_m2": "m2",
		"mobility_cm2pVps": "cm2/(V s)", "diffusion_transverse_pmps_se": "1/(m s)",
	} {
		c := Column{Name: name, Unit: unit, Doc: "doc", Float: []float64{}}
		if errs := c.check(); len(errs) > 0 {
			t.Errorf("%s: %v", name, errs)
		}
	}
}

// TestValidateFindsAll: one fault a case, so that a check that is missing shows.
func TestValidateFindsAll(t *testing.T) {
	float := func(name, unit string) Column {
		return Column{Name: name, Unit: unit, Doc: "doc", Float: []float64{1, 2}}
	}
	for _, c := range []struct {
		column Column
		want   string
	}{
		{float("energy_eV", "eV"), `column "energy_eV" stands twice`},
		{
			Column{Name: "n", Doc: "doc", Int: []int64{1}},
			`column "n" has 1 rows, "electrode" has 2: want equal lengths`,
		},
		{float("", ""), `column "": name is empty or holds spaces or control characters`},
		{float("a b", ""), `column "a b": name is empty or holds spaces or control characters`},
		{
			Column{Name: "n", Doc: "doc", Float: []float64{1, 2}, Int: []int64{1, 2}},
			`column "n": holds numbers and whole numbers, want one of numbers, whole numbers, texts`,
		},
		{Column{Name: "n", Float: []float64{1, 2}}, `column "n": no doc: say what it is`},
		{float("gap_m", "V"), `column "gap_m": name states the unit "m", the column has "V"`},
		{float("gap_m", ""), `column "gap_m": name states the unit "m", the column has none`},
		{float("gap", "m"), `column "gap": name does not end in a unit, the column has "m"`},
		{float("gap_mm", "mm"), `column "gap_mm": unit "mm" is not on the list of units`},
		{float("a_m.b_V", "V"), `column "a_m.b_V": name states the units ["m" "V"], want one`},
		{
			Column{Name: "t_s", Unit: "s", Doc: "doc", Text: []string{"a", "b"}},
			`column "t_s": texts with the unit "s", want none`,
		},
		{
			float("gap_m", "m3/s"),
			`column "gap_m": name states the unit "m", the column has "m3/s"`,
		},
		{float("gap_m_se", "m"), `column "gap_m_se": standard error without its column "gap_m"`},
		{
			float("electrode_se", ""),
			`column "electrode_se": a standard error and "electrode" must be numbers`,
		},
		{
			Column{Name: "s", Doc: "doc", Text: []string{"a", "\xff"}},
			`column "s": row 1: "\xff" is not UTF-8`,
		},
	} {
		s := sound()
		s.Columns = append(s.Columns, c.column)
		want := `table "ion_energy": ` + c.want
		if err := s.Validate(); err == nil || err.Error() != want {
			t.Errorf("got %v, want %s", err, want)
		}
	}
}

func TestValidateReportsEverythingAtOnce(t *testing.T) {
	s := New("ion energy", "")
	s.AddFloat("gap", "m", "", []float64{1})
	s.AddFloat("gap", "", "doc", []float64{1, 2})
	s.Columns = append(s.Columns, Column{Name: "n", Doc: "doc"})
	err := s.Validate()
	for _, want := range []string{
		"name: want letters", "no doc", "does not end in a unit",
		"stands twice", "has 2 rows", "holds nothing",
	} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q is missing from: %v", want, err)
		}
	}
	if err := New("empty", "").Validate(); err == nil {
		t.Error("a table without columns is accepted")
	}
}

// TestEmptyColumnsKeepTheirKind: no rows is no error, and nil says the same as an empty array.
func TestEmptyColumnsKeepTheirKind(t *testing.T) {
	s := New("t", "")
	s.AddFloat("a", "", "doc", nil)
	s.AddInt("b", "", "doc", nil)
	s.AddText("c", "doc", nil)
	if err := s.Validate(); err != nil {
		t.Fatal(err)
	}
	if s.Columns[0].Float == nil || s.Columns[1].Int == nil || s.Columns[2].Text == nil {
		t.Error("an empty column does not say what it holds")
	}
}

func Example() {
	t := New("waveforms", "over one RF period")
	t.AddFloat("phase_rad", "rad", "RF phase", []float64{0, 3.14})
	t.AddFloat("drive", "V", "voltage of the powered electrode", []float64{250, -250})
	fmt.Println(t.Validate())
	// Output:
	// table "waveforms": column "drive": name does not end in a unit, the column has "V"
}
