package probe

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

// csv writes sweeps as a file, with the header.
func csv(header, separator string, sweeps []Sweep, current float64) string {
	var b strings.Builder
	b.WriteString("# invented\n" + header + "\n")
	for _, s := range sweeps {
		for k, v := range s.Voltage {
			fmt.Fprintf(&b, "%.6f%s%.8g\n", v, separator, current*s.Current[k])
		}
	}
	return b.String()
}

// Goal: files of other forms give the same sweeps. Method: units, separators and signs.
func TestReadForms(t *testing.T) {
	want := plasmas()["Maxwellian"].make(argonSetup(), 1)
	back := Sweep{}
	for k := range want[0].Voltage {
		last := len(want[0].Voltage) - 1 - k
		back.Voltage = append(back.Voltage, want[0].Voltage[last])
		back.Current = append(back.Current, want[0].Current[last])
	}
	both := []Sweep{want[0], back, want[0]}
	for _, c := range []struct {
		header, separator string
		factor            float64
	}{
		{"voltage_V,current_A", ",", 1},
		{"Bias (V);Current (mA)", ";", 1e3},
		{"U/V\tI/uA", "\t", 1e6},
		{"V_V current_A", " ", -1},
	} {
		f, err := ReadSweeps("a.csv", []byte(csv(c.header, c.separator, both, c.factor)), Columns{})
		if err != nil {
			t.Errorf("%s: %v", c.header, err)
			continue
		}
		if len(f.Sweeps) != 3 || !f.Sweeps[0].Up || f.Sweeps[1].Up {
			t.Errorf("%s: %d sweeps, want up, down, up", c.header, len(f.Sweeps))
			continue
		}
		near(t, c.header, f.Sweeps[0].Current[250], want[0].Current[250], 1e-6)
	}
}

// Goal: bad files are refused with their place. Method: the whole message, or its start.
func TestReadBad(t *testing.T) {
	sweeps := plasmas()["Maxwellian"].make(argonSetup(), 1)
	good := csv("voltage_V,current_A", ",", sweeps, 1)
	lines := strings.Split(good, "\n")
	for name, c := range map[string]struct{ text, want string }{
		"empty":   {"", "a.csv: got an empty file, want a header such as voltage_V,current_A"},
		"no rows": {"voltage_V,current_A\n", "a.csv:1:1: got no rows of numbers"},
		"few": {
			strings.Join(lines[:14], "\n"),
			"a.csv:3: sweep 1: got 12 points, want 30 at least",
		},
		"column": {
			strings.Replace(good, "current_A", "ampere", 1),
			`a.csv:2:1: current: got columns "voltage_V", "ampere", want one column of the current`,
		},
		"unit": {
			strings.Replace(good, "current_A", "current (kA)", 1),
			`a.csv:2:2: current: got the unit "kA" in "current (kA)", want one of A, mA, uA, nA`,
		},
		"nan": {
			strings.Replace(good, lines[5], "1,NaN", 1),
			`a.csv:6:2: current: got "NaN", want a finite number`,
		},
		"short line": {
			strings.Replace(good, lines[5], "1", 1),
			"a.csv:6: current: got 1 columns, want 2 as in the header of line 2",
		},
		"no electrons": {
			strings.Join(lines[:150], "\n"),
			"a.csv:2: current: got -",
		},
		"swapped voltage": {
			csv("voltage_V,current_A", ",", []Sweep{mirrored(sweeps[0])}, 1),
			"a.csv:2: voltage: got a current of",
		},
	} {
		_, err := ReadSweeps("a.csv", []byte(c.text), Columns{})
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%s: got %v, want %s ...", name, err, c.want)
		}
	}
}

func mirrored(s Sweep) Sweep {
	out := Sweep{Current: s.Current}
	for _, v := range s.Voltage {
		out.Voltage = append(out.Voltage, -v)
	}
	return out
}

// Goal: without a knee no plasma potential and no density, but the temperature. Method: a sweep cut
// below the plasma potential.
func TestNoKnee(t *testing.T) {
	s := plasmas()["Maxwellian"]
	sweeps := s.make(argonSetup(), 1)
	n := 0
	for sweeps[0].Voltage[n] < s.potential-1.5*s.temperature {
		n++
	}
	sweeps[0].Voltage, sweeps[0].Current = sweeps[0].Voltage[:n], sweeps[0].Current[:n]
	r, err := Reduce(sweeps, argonSetup(), Choices{Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{KeyPlasma, KeyElectronDensity, KeyIonDensity} {
		if q := r.Get(key); q.Known() || !strings.Contains(q.Reason, "knee") {
			t.Errorf("%s: got %+v, want it not known for want of a knee", key, q)
		}
	}
	q := r.Get(KeyTemperature)
	if !(math.Abs(q.Value-s.temperature) < 4*q.SE) || q.SE > 0.3 {
		t.Errorf("temperature: got %.3g +- %.2g, want 3", q.Value, q.SE)
	}
	if len(r.Cautions) == 0 {
		t.Error("no caution")
	}
}

// Goal: outliers and clipping are found and do no harm. Method: three wild points, a limit.
func TestOutliersAndClipping(t *testing.T) {
	s := plasmas()["Maxwellian"]
	sweeps := s.make(argonSetup(), 1)
	for _, k := range []int{40, 150, 230} {
		sweeps[0].Current[k] += 0.3 * sweeps[0].Current[260]
	}
	limit := sweeps[0].Current[280]
	for k, i := range sweeps[0].Current {
		sweeps[0].Current[k] = math.Min(i, limit)
	}
	r, err := Reduce(sweeps, argonSetup(), Choices{Seed: 1, Resamplings: 20})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "density", r.Get(KeyElectronDensity).Value, s.density, 0.03)
	text := strings.Join(append(r.Notes, r.Cautions...), "\n")
	for _, want := range []string{"3 points were left out as outliers", "is clipped above"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in %q", want, text)
		}
	}
}

// Goal: window errors of the second derivative. Method: published factors on an exponential of
// temperature T, and the noise gain of white noise.
func TestSmoothing(t *testing.T) {
	for _, c := range []struct {
		order         int
		width, factor float64
	}{
		{2, 0.5, 1.005},
		{2, 1, 1.021},
		{2, 2, 1.08},
		{2, 4, 1.34},
		{4, 0.5, 1.000},
		{4, 1, 1.000},
		{4, 2, 0.998},
		{4, 4, 0.975},
		{4, 8, 0.46},
	} {
		const half = 20 // the largest window of the source
		f, err := NewSavitzkyGolay(half, c.order)
		if err != nil {
			t.Fatal(err)
		}
		h := c.width / (2 * half)
		y := make([]float64, 2*half+1)
		for k := range y {
			y[k] = math.Exp(float64(k-half) * h)
		}
		// The sources give the last digit.
		near(t, fmt.Sprint(c), f.Apply(y, 2, h)[half], c.factor, 0.012)
	}
	for points, want := range map[int]float64{11: 0.068, 21: 0.0134, 41: 0.0025} {
		quadratic, _ := NewSavitzkyGolay(points/2, 2)
		quartic, _ := NewSavitzkyGolay(points/2, 4)
		near(t, "gain", quadratic.Gain(2), want, 0.02)
		near(t, "gain of the quartic", quartic.Gain(2)/quadratic.Gain(2), 3.5, 0.1)
	}
}
