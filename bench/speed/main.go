// Command speed measures the program on this machine and writes bench/SPEED.md:
//
//	go run ./bench/speed [-runs 5] [-write]
//
// Whole-loop figures are medians over runs; things that are compared are run in turn.
package main

import (
	"bytes"
	"flag"
	"fmt"
	"io"
	"os"
	"os/exec"
	"runtime"
	"slices"
	"strings"
	"time"

	"ionfall/crosssections"
	"ionfall/diagnostics"
	"ionfall/internal/codec"
	"ionfall/internal/phys"
	"ionfall/mcc"
	"ionfall/pic"
)

func main() {
	runs := flag.Int("runs", 5, "runs of each whole loop")
	write := flag.Bool("write", false, "write bench/SPEED.md instead of printing")
	peak := flag.Bool("peak", false, "run a million particles and print the peak memory")
	flag.Parse()
	var text []byte
	var err error
	if *peak {
		text, err = peakMemory()
	} else {
		text, err = report(*runs)
	}
	if err == nil && *write {
		err = os.WriteFile("bench/SPEED.md", text, 0o644)
	} else if err == nil {
		_, err = os.Stdout.Write(text)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "speed:", err)
		os.Exit(1)
	}
}

func report(runs int) ([]byte, error) {
	var b bytes.Buffer
	fmt.Fprintf(&b, "# Speed\n\nWritten by `go run ./bench/speed -write` on %s: %s, %s/%s, "+
		"%d processors.\n\n", time.Now().UTC().Format(time.DateOnly),
		cpuName(), runtime.GOOS, runtime.GOARCH, runtime.NumCPU())
	if err := loops(&b, runs); err != nil {
		return nil, err
	}
	if err := memory(&b); err != nil {
		return nil, err
	}
	err := pieces(&b)
	return b.Bytes(), err
}

// loops times the conditions of the helium benchmark, case 1 (M. M. Turner et al., Phys. Plasmas
// 20, 013507 (2013)), with its numerics, collisions, fields and all diagnostics.
func loops(b *bytes.Buffer, runs int) error {
	var one, two []float64
	for range runs {
		for workers, list := range map[int]*[]float64{1: &one, 2: &two} {
			speed, err := heliumSpeed(workers, 128*512)
			if err != nil {
				return err
			}
			*list = append(*list, speed)
		}
	}
	fmt.Fprintf(b, "Helium benchmark case 1, published numerics (128 cells, 512 particles a cell, "+
		"400 steps a\nperiod, momentum conserving, ions moved every step), all diagnostics on. "+
		"Million particle\n"+
		"moves a second, %d runs:\n\n| workers | median | least | most |\n|---|---|---|---|\n", runs)
	for i, list := range [][]float64{one, two} {
		slices.Sort(list)
		fmt.Fprintf(b, "| %d | %.0f | %.0f | %.0f |\n", i+1, list[len(list)/2]/1e6,
			list[0]/1e6, list[len(list)-1]/1e6)
	}
	fmt.Fprintf(b, "\nTwo workers over one, medians: %.2f.\n\n", two[len(two)/2]/one[len(one)/2])
	return nil
}

// heliumSpeed returns particle moves a second of wall time over some RF periods.
func heliumSpeed(workers, particles int) (float64, error) {
	s, err := helium(particles)
	if err != nil {
		return 0, err
	}
	s.SetWorkers(workers)
	rec := diagnostics.New(s, nil, 0)
	s.SetObservers(rec)
	if err := s.Advance(400); err != nil {
		return 0, err
	}
	s.TakeLedger()
	rec.Start(4) // periods of a batch, as in a run
	begin := time.Now()
	moved := int64(0)
	for range 8 {
		if err := s.Advance(400); err != nil {
			return 0, err
		}
		l := s.TakeLedger()
		rec.EndPeriod(l.Weight)
		moved += l.Moved
	}
	return float64(moved) / time.Since(begin).Seconds(), nil
}

func helium(particles int) (*pic.Simulation, error) {
	library, err := crosssections.Bundled()
	if err != nil {
		return nil, err
	}
	gas, err := library.Gas("He")
	if err != nil {
		return nil, err
	}
	c := pic.Config{
		Gap: 0.067, Cells: 128, Period: 1 / 13.56e6, StepsPerPeriod: 400, Chunks: 32, Seed: 1,
		Drive:  pic.Drive{Tones: []pic.Tone{{Harmonic: 1, Amplitude: 450, Phase: -1.5707963267948966}}},
		Weight: 2.56e14 * 0.067 / float64(particles),
	}
	background := []mcc.Background{{Gas: gas, Density: 9.64e20, Temperature: 300}}
	ion := gas.Ions[0]
	for _, sp := range []pic.Species{
		{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1},
		{Name: ion.Name, Charge: ion.Charge, Mass: ion.Mass, Every: 1},
	} {
		sp.Collisions, err = mcc.NewModel(mcc.Settings{
			Projectile: sp.Name, Mass: sp.Mass, Unit: c.VelocityUnit(1), TimeStep: c.TimeStep(),
			TopEnergy: 640,
		}, background)
		if err != nil {
			return nil, err
		}
		c.Species = append(c.Species, sp)
	}
	s, err := pic.New(c)
	if err != nil {
		return nil, err
	}
	uniform := slices.Repeat([]float64{1}, c.Cells+1)
	if err := s.Load(0, particles, uniform, 30000); err != nil {
		return nil, err
	}
	return s, s.Load(1, particles, uniform, 300)
}

// memory has a process of its own report its peak.
func memory(b *bytes.Buffer) error {
	exe, err := os.Executable()
	if err != nil {
		return err
	}
	out, err := exec.Command(exe, "-peak").CombinedOutput()
	if err != nil {
		return fmt.Errorf("%w: %s", err, out)
	}
	fmt.Fprintf(b, "Peak memory of a process with 1e6 particles, two workers, diagnostics on: %s.\n\n",
		strings.TrimSpace(string(out)))
	return nil
}

// peakMemory moves half a million electrons and as many ions for two periods and a checkpoint.
func peakMemory() ([]byte, error) {
	s, err := helium(500_000)
	if err != nil {
		return nil, err
	}
	s.SetWorkers(2)
	rec := diagnostics.New(s, nil, 0)
	s.SetObservers(rec)
	rec.Start(1)
	for range 2 {
		if err := s.Advance(400); err != nil {
			return nil, err
		}
		rec.EndPeriod(s.TakeLedger().Weight)
	}
	enc := codec.NewEncoder("speed", 1)
	s.Save(enc, "sim.")
	rec.Save(enc, "rec.")
	if _, err := enc.WriteTo(io.Discard); err != nil {
		return nil, err
	}
	status, err := os.ReadFile("/proc/self/status")
	if err != nil {
		return nil, fmt.Errorf("peak memory is read from /proc: %w", err)
	}
	for line := range strings.Lines(string(status)) {
		if rest, ok := strings.CutPrefix(line, "VmHWM:"); ok {
			return []byte(strings.TrimSpace(rest) + "\n"), nil
		}
	}
	return nil, fmt.Errorf("no VmHWM in /proc/self/status")
}

// cpuName returns the processor's name, or "unknown".
func cpuName() string {
	info, err := os.ReadFile("/proc/cpuinfo")
	if err != nil {
		return "unknown processor"
	}
	for line := range strings.Lines(string(info)) {
		if name, ok := strings.CutPrefix(line, "model name"); ok {
			return strings.TrimSpace(strings.TrimLeft(name, "\t :"))
		}
	}
	return "unknown processor"
}

// pieces adds the benchmarks of single parts, by the language's own tool.
func pieces(b *bytes.Buffer) error {
	out, err := exec.Command("go", "test", "-run", "^$", "-bench", ".", "-count", "5",
		"./internal/kernels", "./internal/rng", "./pic", "./mcc").CombinedOutput()
	if err != nil {
		return fmt.Errorf("%w: %s", err, out)
	}
	fmt.Fprintf(b, "Parts (`go test -bench . -count 5`):\n\n```\n")
	for line := range strings.Lines(string(out)) {
		if strings.HasPrefix(line, "Benchmark") {
			b.WriteString(line)
		}
	}
	b.WriteString("```\n")
	return nil
}
