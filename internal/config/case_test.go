package config

import (
	"fmt"
	"math"
	"reflect"
	"testing"
)

// Goal: what is left out has the documented default. Method: the shortest input, whole.
func TestDefaults(t *testing.T) {
	want := &Case{
		Gap: 0.04, Geometry: Geometry{Shape: "planar", AreaRatio: 1},
		Gas: Gas{
			Pressure: 5, Temperature: 300, Mixture: []Component{{"Ar", 1}},
			IonizationSharing: EqualSharing, ElectronScattering: IsotropicScattering,
		},
		Drive: Drive{
			Tones: []Tone{{Frequency: 13.56e6, Amplitude: 250}},
		},
		Electrodes: Electrodes{
			Powered:  Electrode{SecondaryElectronEnergy: 1},
			Grounded: Electrode{SecondaryElectronEnergy: 1, Substrate: true},
		},
		Accuracy: Accuracy{0.01, 0.01},
		Seed:     1,
		Numerics: Numerics{Extrapolation: "auto"},
	}
	if got := mustParse(t, minimal); !got.Equal(want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

// Goal: every key arrives in its field, in SI. Method: a sample with all keys, whole.
func TestEveryKey(t *testing.T) {
	want := &Case{
		Title:    "silane in hydrogen: two tones, 250 °C",
		Gap:      0.025,
		Geometry: Geometry{Shape: "planar", AreaRatio: 1},
		Gas: Gas{
			Pressure: 0.75 * 101325 / 760, Temperature: 523.15, Library: "../my gases",
			IonizationSharing: OpalSharing, ElectronScattering: ForwardScattering,
			FastNeutrals: &FastNeutrals{2},
			Mixture:      []Component{{"H2", 0.95}, {"SiH4", 0.0499}, {"NO", 1e-4}},
		},
		Drive: Drive{
			Tones: []Tone{
				{Frequency: 13.56e6, Amplitude: 200, Phase: math.Pi / 2},
				{Frequency: 2e6, Amplitude: 100},
			},
			Bias: -12.5,
		},
		Electrodes: Electrodes{
			Powered: Electrode{
				IonSecondaryYield: 0.1, SecondaryElectronEnergy: 0.5, ElectronReflection: 0.2,
				Substrate: true,
			},
			Grounded: Electrode{
				IonSecondaryYield: 0.05, SecondaryElectronEnergy: 1, Substrate: true,
			},
		},
		Accuracy:            Accuracy{0.005, 0.01},
		Budget:              Budget{600, 3000},
		Initial:             Initial{2.56e14, 2.5 * 1.602176634e-19 / 1.380649e-23},
		Film:                &Film{0.3e-9, 5e28},
		IonEnergyThresholds: []float64{20, 50},
		CoulombCollisions:   true,
		Seed:                math.MaxUint64,
		Numerics: Numerics{
			512, 4000, 200, "energy_conserving", 10, 5000, 1000,
			"off",
		},
	}
	got := mustParse(t, string(validFiles(t)["testdata/full.yaml"]))
	// The three products of doubles above round differently from the exact conversion.
	for _, f := range []struct{ got, want *float64 }{
		{&got.Gas.Pressure, &want.Gas.Pressure},
		{&got.Initial.ElectronTemperature, &want.Initial.ElectronTemperature},
		{&got.Film.GrowthRate, &want.Film.GrowthRate},
	} {
		if math.Abs(*f.got / *f.want - 1) > 4*0x1p-52 {
			t.Errorf("got %v, want %v", *f.got, *f.want)
		}
		*f.got = *f.want
	}
	if !got.Equal(want) {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

// fillEvery sets every field of a struct to something that is not zero.
func fillEvery(v reflect.Value, set func(path string), path string) {
	for i := range v.NumField() {
		f, name := v.Field(i), path+"."+v.Type().Field(i).Name
		if !v.Type().Field(i).IsExported() {
			continue
		}
		old := reflect.New(f.Type()).Elem()
		old.Set(f)
		switch f.Kind() {
		case reflect.Struct:
			fillEvery(f, set, name)
			continue
		case reflect.Float64:
			f.SetFloat(f.Float() + 1)
		case reflect.Int:
			f.SetInt(f.Int() + 1)
		case reflect.Uint64:
			f.SetUint(f.Uint() + 1)
		case reflect.String:
			f.SetString(f.String() + "x")
		case reflect.Bool:
			f.SetBool(!f.Bool())
		case reflect.Slice:
			f.Set(reflect.MakeSlice(f.Type(), f.Len()+1, f.Len()+1))
		case reflect.Pointer:
			f.Set(reflect.New(f.Type().Elem()))
		default:
			panic(fmt.Sprint("no change for ", f.Kind()))
		}
		set(name)
		f.Set(old)
	}
}

// Goal: Equal sees every field and no position. Method: change each field in turn; read the same
// input from another place.
func TestEqual(t *testing.T) {
	c, same := mustParse(t, minimal), mustParse(t, "# a line more\n"+minimal)
	if !c.Equal(same) {
		t.Error("a comment makes a difference")
	}
	changed := 0
	fillEvery(reflect.ValueOf(same).Elem(), func(path string) {
		changed++
		if c.Equal(same) {
			t.Errorf("a change of %s makes no difference", path)
		}
	}, "")
	if changed != 66 {
		t.Errorf("%d fields were changed, want 66", changed)
	}
	same.IonEnergyThresholds = []float64{}
	if !c.Equal(same) {
		t.Error("an empty list differs from none")
	}
	if c.Equal(nil) || !(*Case)(nil).Equal(nil) {
		t.Error("nil is wrong")
	}
}

// Goal: the caller can point at any key. Method: lines and columns counted by hand.
func TestPosition(t *testing.T) {
	c := mustParse(t, minimal+"numerics:\n  cells: 100\n  scheme: auto\nseed:   7\n")
	for key, want := range map[string][2]int{
		"gap":                      {1, 6},
		"gas":                      {3, 3},
		"gas.pressure":             {3, 13},
		"gas.mixture.Ar":           {4, 13}, // the name, not the fraction
		"gas.mixture.He":           {4, 12}, // not there: the mixture
		"gas.temperature":          {3, 3},  // not there: the gas
		"drive.tones.0.frequency":  {6, 23},
		"drive.tones.0.phase":      {6, 11},
		"numerics.cells":           {8, 10},
		"numerics.ion_substeps":    {8, 3},
		"seed":                     {10, 9},
		"electrodes.powered":       {1, 1},
		"":                         {1, 1},
		"drive.tones.17.frequency": {6, 10},
	} {
		file, line, col := c.Position(key)
		if file != "test.yaml" || line != want[0] || col != want[1] {
			t.Errorf("%q: got %s:%d:%d, want %v", key, file, line, col, want)
		}
	}
	got := c.Errorf("gas.mixture.Ar", "Ar", "a gas of the library", "").Error()
	if want := "test.yaml:4:13: gas.mixture.Ar: got Ar, want a gas of the library"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	copied := *c
	copied.Gap = 1
	if _, line, _ := copied.Position("seed"); line != 10 {
		t.Error("a copy lost its positions")
	}
	if got := new(Case).Errorf("gap", "0 m", "", "").Error(); got != "gap: got 0 m" {
		t.Errorf("case without file: got %q", got)
	}
}

// Goal: the fundamental is that of the decimals as written. Method: cases worked out by hand.
func TestFundamental(t *testing.T) {
	for _, c := range []struct {
		tones []float64
		want  float64
	}{
		{nil, 0},
		{[]float64{13.56e6}, 13.56e6},
		{[]float64{13.56e6, 27.12e6}, 13.56e6},
		{[]float64{27.12e6, 13.56e6}, 13.56e6},
		{[]float64{2e6, 13.56e6}, 40e3},
		{[]float64{13.56e6, 2e6, 60e6}, 40e3},
		{[]float64{0.1, 0.3}, 0.1},
		{[]float64{0.6, 0.45}, 0.15},
		{[]float64{5e6, 5e6}, 5e6},
		{[]float64{400e3, 1e10}, 400e3},
		{[]float64{5e6, 0}, 0},
		{[]float64{5e6, math.NaN()}, 0},
		{[]float64{5e6, math.Inf(1)}, 0},
	} {
		var d Drive
		for _, f := range c.tones {
			d.Tones = append(d.Tones, Tone{Frequency: f})
		}
		if got := d.Fundamental(); got != c.want {
			t.Errorf("%v: got %v, want %v", c.tones, got, c.want)
		}
	}
}

// Goal: exactly 1/1000 of the highest tone is allowed, less is not, and the two tones named are
// those that do it. Method: tones on both sides of the limit.
func TestUnrelated(t *testing.T) {
	for _, c := range []struct {
		tones []float64
		i, j  int
	}{
		{[]float64{1000, 1}, 0, 0},
		{[]float64{1001, 1}, 0, 1},
		{[]float64{1000, 999}, 0, 0},
		{[]float64{1001, 1000}, 0, 1},
		{[]float64{2000, 1000, 2001}, 0, 2},
		{[]float64{3000, 6000, 5999, 9000}, 0, 2},
		// Every two of these have a high enough one, 7 at least, but all have only 1.
		{[]float64{30 * 7, 30 * 11, 7 * 11 * 30, 7 * 11 * 31}, 0, 3},
	} {
		var d Drive
		for _, f := range c.tones {
			d.Tones = append(d.Tones, Tone{Frequency: f})
		}
		if i, j := d.unrelated(); i != c.i || j != c.j {
			t.Errorf("%v: got %d and %d, want %d and %d", c.tones, i, j, c.i, c.j)
		}
	}
}
