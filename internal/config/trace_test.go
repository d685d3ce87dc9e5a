package config

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// traceFile writes a trace into a folder of its own.
func traceFile(t *testing.T, text string) string {
	t.Helper()
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "scope.csv"), []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return dir
}

// scope is a trace of n samples over periods of 10 MHz, in ns and V.
func scope(n int, periods float64, v func(part float64) float64) string {
	var b strings.Builder
	b.WriteString("# made for this test\ntime_ns, voltage_V\n")
	for i := range n + 1 {
		part := periods * float64(i) / float64(n)
		fmt.Fprintf(&b, "%.9g,%.9g\n", -7+100*part, v(part))
	}
	return b.String()
}

// Goal: a trace gives back the tones that it was made of, and says what the band limit left out.
// Method: three tones and a constant; linear interpolation between 2000 samples loses
// (pi k/2000)^2/6 of tone k, 1e-5 at most here.
func TestTraceGivesTones(t *testing.T) {
	tones := []Tone{
		{Frequency: 10e6, Amplitude: 200, Phase: 0.5},
		{Frequency: 20e6, Amplitude: 50, Phase: -2},
		{Frequency: 50e6, Amplitude: 10, Phase: 1},
	}
	dir := traceFile(t, scope(5000, 2.5, func(part float64) float64 {
		v := -30.0
		for _, tone := range tones {
			v += tone.Amplitude * math.Cos(2*math.Pi*tone.Frequency*1e-7*part+tone.Phase)
		}
		return v
	}))
	trace := Trace{File: "scope.csv", Frequency: 10e6, Harmonics: 4}
	w, err := trace.Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	near := func(name string, got, want, tolerance float64) {
		if !(math.Abs(got-want) <= tolerance) {
			t.Errorf("%s: %g, want %g", name, got, want)
		}
	}
	near("constant", w.Bias, -30, 1e-3)
	near("left out", w.Left, 10/math.Sqrt2, 1e-3)
	if len(w.Tones) != 4 {
		t.Fatalf("%d tones", len(w.Tones))
	}
	for _, want := range tones[:2] {
		got := w.Tones[int(want.Frequency/10e6)-1]
		near("amplitude", got.Amplitude, want.Amplitude, 1e-3)
		near("phase", got.Phase, want.Phase, 1e-4)
		near("frequency", got.Frequency, want.Frequency, 0)
	}
	near("third harmonic", w.Tones[2].Amplitude, 0, 1e-3)
}

// Goal: a trace that cannot be used says so, with the line. Method: one mistake each.
func TestBadTraces(t *testing.T) {
	sine := func(part float64) float64 { return 100 * math.Cos(2*math.Pi*part) }
	for want, text := range map[string]string{
		"scope.csv:93: got an end":   scope(90, 0.9, sine),
		"does not close its period":  scope(200, 1.3, func(p float64) float64 { return sine(p * 0.9) }),
		"scope.csv:1: got 1,2":       "1,2\n3,4\n",
		"scope.csv:3: got 2,x":       "time_s,voltage_V\n1,2\n2,x\n",
		"scope.csv:3: got time 1":    "time_s,voltage_V\n1,2\n1,3\n",
		"got 2 samples":              "time_s,voltage_kV\n1,2\n3,4\n",
		"got a constant voltage":     scope(100, 1, func(float64) float64 { return 5 }),
		"a heading such as time_ns,": "time,voltage\n1,2\n",
	} {
		trace := Trace{File: "scope.csv", Frequency: 10e6}
		_, err := trace.Load(traceFile(t, text))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want it to say %q", err, want)
		}
	}
	missing := Trace{File: "none.csv", Frequency: 1e6}
	_, err := missing.Load(t.TempDir())
	if err == nil || !strings.Contains(err.Error(), "no such file") {
		t.Error(err)
	}
}

// Goal: the named series are what their definitions say. Method: extremes and the sum of
// amplitudes; the minimum of cos x + cos 2x is -9/8.
func TestSeries(t *testing.T) {
	extremes := func(s Series) (low, high, rise float64) {
		s.Frequency, s.Amplitude = 13.56e6, 200
		d := Drive{Series: &s}
		d.Expand()
		sum, steepest := 0.0, 0.0
		for _, tone := range d.Tones {
			sum += tone.Amplitude
		}
		if math.Abs(sum-200) > 1e-9 || d.Fundamental() != 13.56e6 {
			t.Errorf("%s: sum of amplitudes %g, fundamental %g", s.Shape, sum, d.Fundamental())
		}
		low, high = 1e9, -1e9
		for i := range 3600 {
			v, slope := 0.0, 0.0
			for _, tone := range d.Tones {
				x := 2*math.Pi*tone.Frequency/13.56e6*float64(i)/3600 + tone.Phase
				v += tone.Amplitude * math.Cos(x)
				slope -= tone.Amplitude * tone.Frequency * math.Sin(x)
			}
			low, high = math.Min(low, v), math.Max(high, v)
			if math.Abs(slope) > math.Abs(steepest) {
				steepest = slope
			}
		}
		return low, high, steepest
	}
	for _, c := range []struct {
		series    Series
		low, high float64
	}{
		{Series{Shape: Asymmetric}, -112.5, 200},
		{Series{Shape: Asymmetric, Phase: math.Pi / 2}, -200, 112.5},
		{Series{Shape: Peaks}, -50, 200},
		{Series{Shape: Peaks, Harmonics: 1}, -200, 200},
		{Series{Shape: Valleys, Harmonics: 3}, -200, 200 / 3.0},
	} {
		low, high, _ := extremes(c.series)
		if math.Abs(low-c.low) > 0.05 || math.Abs(high-c.high) > 0.05 {
			t.Errorf("%+v: %g to %g V, want %g to %g", c.series, low, high, c.low, c.high)
		}
	}
	_, _, up := extremes(Series{Shape: SawtoothUp})
	_, _, down := extremes(Series{Shape: SawtoothDown})
	if !(up < 0 && down > 0) {
		t.Errorf("steepest slopes: %g up, %g down: want the fast one in the other direction", up, down)
	}
}

// Goal: no file makes the reader of traces panic or hang; what it accepts has finite tones, whatever
// it refuses has a message with the file's name.
func FuzzTrace(f *testing.F) {
	sine := func(part float64) float64 { return 100 * math.Cos(2*math.Pi*part) }
	for _, text := range []string{
		scope(40, 1, sine), scope(90, 0.9, sine), "time_s,voltage_kV\n0,1\n1e-9,2\n1e30,1\n", "a", "",
	} {
		f.Add([]byte(text), 10e6)
	}
	f.Fuzz(func(t *testing.T, src []byte, frequency float64) {
		if !(frequency > 0 && frequency <= 1e10) {
			return
		}
		trace := Trace{File: "scope.csv", Frequency: frequency, Harmonics: 2}
		w, err := trace.Read("scope.csv", src)
		if err != nil {
			if !strings.HasPrefix(err.Error(), "scope.csv") {
				t.Errorf("message %q", err)
			}
			return
		}
		for _, tone := range w.Tones {
			if math.IsNaN(tone.Amplitude) || math.IsInf(tone.Amplitude, 0) {
				t.Errorf("tone %+v", tone)
			}
		}
	})
}
