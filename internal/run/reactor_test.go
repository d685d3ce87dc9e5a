package run

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// reactorInput is a small discharge with everything that a reactor has: shells, a circuit, two
// tones and a target.
const reactorInput = `
gap: 20 mm
geometry: {shape: cylindrical, area_ratio: 2}
gas: {pressure: 20 Pa, mixture: {Ar: 1}}
drive:
  tones: [{frequency: 13.56 MHz}, {frequency: 27.12 MHz, ratio: 0.5, phase: 90 deg}]
  blocking_capacitor: 20 nF
  resistance: 1 mohm
  power: 15 W
electrodes: {powered: {area: 300 cm2}}
initial: {density: 2e15 /m3, electron_temperature: 3 eV}
accuracy: {ion_energy: 20 %, ion_flux: 20 %}
numerics: {cells: 32, steps_per_period: 480, particles_per_cell: 40, ion_substeps: 4, periods: 90, average_periods: 30}
`

// stopAt interrupts a run after some periods.
func stopAt(cancel context.CancelFunc, periods int) func(progress.Status) {
	return func(s progress.Status) {
		if s.Periods >= periods {
			cancel()
		}
	}
}

// Goal: bias and amplitude are steered to the same bits for any number of workers, and after an
// interrupt in the middle of it. Method: the summaries' results.
func TestReactorIsTheSameBits(t *testing.T) {
	results := func(cores int, interrupted bool) string {
		out := filepath.Join(t.TempDir(), "out")
		o := Options{Out: out, Cores: cores}
		var s *store.Summary
		var err error
		if interrupted {
			ctx, cancel := context.WithCancel(context.Background())
			first := o
			first.Progress = stopAt(cancel, 37)
			if _, _, err = Run(ctx, plan(t, reactorInput), first); !errors.Is(err, ErrInterrupted) {
				t.Fatal(err)
			}
			s, _, err = Resume(context.Background(), out, Options{Cores: cores})
		} else {
			s, _, err = Run(context.Background(), plan(t, reactorInput), o)
		}
		if err != nil {
			t.Fatal(err)
		}
		return fmt.Sprintf("%+v", s.Results)
	}
	want := results(1, false)
	if got := results(3, false); got != want {
		t.Errorf("other results with 3 workers:\n%s\n%s", got, want)
	}
	if got := results(2, true); got != want {
		t.Errorf("other results after an interrupt:\n%s\n%s", got, want)
	}
}

// Goal: what the meters show fits together: V/J is the impedance, power is V J cos(phase)/2 summed
// over the tones, as there is no constant voltage; totals are the densities times the area. Method:
// the results of one run.
func TestMetersFitTogether(t *testing.T) {
	input := strings.Replace(reactorInput, "blocking_capacitor: 20 nF", "bias: 0 V", 1)
	s, dir, err := Run(context.Background(), plan(t, input),
		Options{Out: filepath.Join(t.TempDir(), "out")})
	if err != nil {
		t.Fatal(err)
	}
	get := func(path string) float64 {
		v, ok := s.Lookup(path)
		if !ok {
			t.Fatalf("no %s in %s", path, dir)
		}
		return v.Value
	}
	near := func(name string, got, want, tolerance float64) {
		if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
			t.Errorf("%s: %g, want %g", name, got, want)
		}
	}
	power := 0.0
	for _, f := range []string{"13p56MHz", "27p12MHz"} {
		v, j := get("voltage_amplitude_V."+f), get("current_amplitude_Apm2."+f)
		phase := get("current_phase_deg."+f) * math.Pi / 180
		near("impedance", math.Hypot(get("resistance_Ohmm2."+f), get("reactance_Ohmm2."+f)), v/j, 1e-6)
		near("resistance", get("resistance_Ohmm2."+f), v/j*math.Cos(phase), 1e-3)
		power += 0.5 * v * j * math.Cos(phase)
	}
	near("power", power, get("power_Wpm2.total"), 0.02)
	near("whole power", get("power_W"), 0.03*get("power_Wpm2.total"), 1e-9)
	near("whole current", get("current_rms_A"), 0.03*get("current_rms_Apm2"), 1e-9)
	sum, se := 0.0, 0.0
	for _, part := range []string{"sheath_powered", "bulk", "sheath_grounded"} {
		v, _ := s.Lookup("electron_power_Wpm2." + part)
		sum, se = sum+v.Value, se+v.SE
	}
	electrons, _ := s.Lookup("power_Wpm2.electron")
	if !(math.Abs(sum-electrons.Value) < 5*math.Hypot(se, electrons.SE)) {
		t.Errorf("power of the electrons by place: %g +- %g, want %+v", sum, se, electrons)
	}
	if get("ion_flux_m2ps.powered.all") < get("ion_flux_m2ps.grounded.all") {
		t.Error("more ions per area at the larger electrode")
	}
}

// Goal: a power that no voltage up to the limit gives ends with an error that names the best
// reached, and results. Method: a limit far too low.
func TestTargetOutOfReach(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	input := strings.Replace(reactorInput, "power: 15 W", "power: 15 kW\n  voltage_limit: 300 V", 1)
	input = strings.Replace(input, "periods: 90", "periods: 240", 1)
	out := filepath.Join(t.TempDir(), "out")
	s, dir, err := Run(context.Background(), plan(t, input), Options{Out: out})
	if !errors.Is(err, ErrTarget) || s == nil || !strings.Contains(err.Error(), "reached at the voltage "+
		"limit of 300 V") {
		t.Fatalf("got %v", err)
	}
	if _, err := os.Stat(filepath.Join(dir, store.SummaryFile)); err != nil {
		t.Error(err)
	}
	if v, _ := s.Lookup("drive_amplitude_V"); v.Value != 300 {
		t.Errorf("amplitude %g V", v.Value)
	}
}

// Goal: a trace is read beside the input, kept with the results, and runs as its tones do. Method:
// results of both, bit for bit; resume from the kept copy after the file is gone.
func TestTraceRunsAsItsTones(t *testing.T) {
	dir := t.TempDir()
	var b strings.Builder
	b.WriteString("time_ns,voltage_V\n")
	for i := range 401 {
		part := float64(i) / 400
		fmt.Fprintf(&b, "%.12g,%.12g\n", 1e9*part/13.56e6,
			150*math.Cos(2*math.Pi*part)+50*math.Sin(4*math.Pi*part))
	}
	const input = "gap: 20 mm\ngas: {pressure: 20 Pa, mixture: {Ar: 1}}\n" +
		"drive: {trace: {file: scope.csv, frequency: 13.56 MHz, harmonics: 3}}\n" +
		"initial: {density: 2e15 /m3}\nnumerics: {cells: 32, steps_per_period: 480, " +
		"particles_per_cell: 20, ion_substeps: 4, periods: 24, average_periods: 12}\n"
	for name, text := range map[string]string{"scope.csv": b.String(), "input.yaml": input} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	p, err := Prepare(filepath.Join(dir, "input.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(dir, "out")
	ctx, cancel := context.WithCancel(context.Background())
	_, _, err = Run(ctx, p, Options{Out: out, Progress: stopAt(cancel, 9)})
	if !errors.Is(err, ErrInterrupted) {
		t.Fatal(err)
	}
	if err := os.Remove(filepath.Join(dir, "scope.csv")); err != nil {
		t.Fatal(err)
	}
	s, _, err := Resume(context.Background(), out, Options{})
	if err != nil {
		t.Fatal(err)
	}
	kept, err := os.ReadFile(filepath.Join(out, waveformFile))
	if err != nil || string(kept) != b.String() {
		t.Errorf("the trace was not kept: %v", err)
	}
	again, err := Prepare(filepath.Join(out, "resolved.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	s2, _, err := Run(context.Background(), again, Options{Out: filepath.Join(dir, "again")})
	if err != nil {
		t.Fatal(err)
	}
	if fmt.Sprintf("%+v", s.Results) != fmt.Sprintf("%+v", s2.Results) {
		t.Error("the resolved input gives other results")
	}
}

// Goal: surfaces reach the simulation: yields by ion and energy, emission by electrons, layers and
// floating wafers with their capacitance; the surface of a layer has the direct voltage that the
// electrode below has not. Method: a short run of unequal shells, and what it was built of.
func TestSurfacesReachTheRun(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	input := strings.Replace(reactorInput, "  blocking_capacitor: 20 nF\n", "", 1)
	input = strings.Replace(input, "electrodes: {powered: {area: 300 cm2}}", `electrodes:
  powered:
    area: 300 cm2
    ion_secondary_yield: {Ar+: dirty_metal}
    electron_emission: {max_yield: 2.4, max_energy: 400 eV}
    dielectric: {thickness: 0.7 mm, permittivity: 3.9}
  grounded: {ion_secondary_yield: 0.1, floating: true}`, 1)
	p := plan(t, input)
	layers := p.layers()
	want := phys.Epsilon0 * 3.9 / 0.7e-3
	if math.Abs(layers[0]/want-1) > 1e-12 || layers[1] != 2*floatingCapacitance {
		t.Errorf("layers %g F/m2", layers)
	}
	s, _, err := Run(context.Background(), p, Options{Out: filepath.Join(t.TempDir(), "out")})
	if err != nil {
		t.Fatal(err)
	}
	metal, _ := s.Lookup("self_bias_V")
	surface, ok := s.Lookup("surface_potential_V.powered")
	if !ok || metal.Value != 0 || !(surface.Value < -10) {
		t.Errorf("metal %+v, surface %+v", metal, surface)
	}
	if g, _ := s.Lookup("surface_potential_V.grounded"); math.Abs(g.Value) > 0.01 {
		t.Errorf("a wafer whose coupling takes no voltage has %+v", g)
	}
}

// Goal: yields that no ion of the mixture can have are refused at their place.
func TestUnknownYields(t *testing.T) {
	for yield, want := range map[string]string{
		"{He+: 0.2}":         "electrodes.powered.ion_secondary_yield.He+: got He+, want an ion of this mixture",
		"{Ar+: clean_metal}": "",
		"clean_metal":        "",
	} {
		_, err := PrepareBytes("case.yaml", []byte(argon+"electrodes: {powered: {ion_secondary_yield: "+
			yield+"}}\n"))
		if (err == nil) != (want == "") || err != nil && !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v", yield, err)
		}
	}
}

// Goal: a pulsed drive is on and off when it should be, and results are resolved over the pulse.
// Method: pulses of 16 RF periods, on for half of them; the voltage by phase of the pulse, and the
// electrons' temperature in the middle, which falls when the drive is off.
func TestPulsedDrive(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	input := "gap: 20 mm\ngas: {pressure: 20 Pa, mixture: {Ar: 1}}\ndrive:\n" +
		"  tones: [{frequency: 13.56 MHz, amplitude: 120 V}]\n  pulse: {rate: 850 kHz, duty: 50 %}\n" +
		"initial: {density: 1e15 /m3}\nnumerics: {cells: 64, steps_per_period: 9600, " +
		"particles_per_cell: 30, ion_substeps: 6, periods: 14, average_periods: 10}\n"
	p := plan(t, input)
	if got := p.period() * 13.56e6; math.Abs(got-16) > 1e-9 {
		t.Fatalf("a pulse of %g periods", got)
	}
	s, dir, err := Run(context.Background(), p, Options{Out: filepath.Join(t.TempDir(), "out")})
	if err != nil {
		t.Fatal(err)
	}
	column := func(file, name string) []float64 {
		tab, err := store.ReadTable(filepath.Join(dir, file))
		if err != nil {
			t.Fatal(err)
		}
		list, err := tab.Floats(name)
		if err != nil {
			t.Fatal(err)
		}
		return list
	}
	phase, drive := column("waveforms.parquet", "phase_rad"), column("waveforms.parquet", "drive_V")
	var on, off float64
	for i, at := range phase {
		if at < math.Pi {
			on = math.Max(on, math.Abs(drive[i]))
		} else {
			off = math.Max(off, math.Abs(drive[i]))
		}
	}
	// A bin is a quarter of an RF period, over which the cosine has the mean 2/pi.
	if math.Abs(on-120*2/math.Pi) > 1 || off > 1e-9 {
		t.Errorf("%g V while on, %g V while off", on, off)
	}
	// The Fourier component of the whole pulse is that of the part which is on, ramps taken off.
	if v, _ := s.Lookup("voltage_amplitude_V.13p56MHz"); math.Abs(v.Value/120-7.0/16) > 0.01 {
		t.Errorf("amplitude over the pulse %g V", v.Value)
	}
	times, te := column("phases.parquet", "phase_rad"), column("phases.parquet", "electron_temperature_eV")
	x := column("phases.parquet", "x_m")
	mean := func(from, to float64) float64 {
		sum, n := 0.0, 0.0
		for i := range x {
			if math.Abs(x[i]-0.01) < 0.001 && times[i] > from && times[i] < to {
				sum, n = sum+te[i], n+1
			}
		}
		return sum / n
	}
	if hot, cold := mean(0.5*math.Pi, math.Pi), mean(1.5*math.Pi, 2*math.Pi); !(cold < 0.9*hot) {
		t.Errorf("electrons of %g eV while on and of %g eV long after", hot, cold)
	}
}
