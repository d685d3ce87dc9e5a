// Command scan measures a scan of 60 points of argon on this machine and writes bench/SCAN.md:
//
//	go run ./bench/scan [-accuracy 3] [-write] [-keep DIR]
//
// The points are pressure x amplitude x gap, run one a core. For comparison, points of the scan are
// run as separate processes, as many at once as there are cores. It takes a quiet machine.
package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"sync"
	"time"

	"ionfall/internal/scan"
	"ionfall/internal/store"
)

const base = `gap: 40 mm
gas: {pressure: 5 Pa, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 250 V}]}
accuracy: {ion_energy: %[1]g %%, ion_flux: %[1]g %%}
`

const plan = `base: base.yaml
vary:
  gas.pressure: {from: 3 Pa, to: 12 Pa, points: 4, spacing: log}
  drive.tones.0.amplitude: {from: 100 V, to: 300 V, points: 5}
  gap: [30 mm, 40 mm, 50 mm]
`

func main() {
	accuracy := flag.Float64("accuracy", 3, "relative error of ion energy and flux [%]")
	write := flag.Bool("write", false, "write bench/SCAN.md instead of printing")
	keep := flag.String("keep", "", "do it in the folder `DIR` and keep it")
	flag.Parse()
	text, err := measure(*accuracy, *keep)
	if err == nil && *write {
		err = os.WriteFile("bench/SCAN.md", text, 0o644)
	} else if err == nil {
		_, err = os.Stdout.Write(text)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "scan:", err)
		os.Exit(1)
	}
}

func measure(accuracy float64, keep string) (text []byte, err error) {
	dir := keep
	if dir == "" {
		if dir, err = os.MkdirTemp("", "scan"); err != nil {
			return nil, err
		}
		defer func() { err = errors.Join(err, os.RemoveAll(dir)) }()
	}
	for name, content := range map[string]string{
		"base.yaml": fmt.Sprintf(base, accuracy), "plan.yaml": plan,
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(content), 0o666); err != nil {
			return nil, err
		}
	}
	p, err := scan.Load(filepath.Join(dir, "plan.yaml"))
	if err != nil {
		return nil, err
	}
	ctx := context.Background()
	f, err := scan.Open(ctx, p, filepath.Join(dir, "scan"))
	if err != nil {
		return nil, err
	}
	r, err := f.Run(ctx, scan.Options{})
	if err != nil {
		return nil, err
	}
	return report(f, r, accuracy, dir)
}

// report compares the scan with separate processes.
func report(f *scan.Folder, r *scan.Report, accuracy float64, dir string) ([]byte, error) {
	verdicts, moves := map[string]int{}, 0.0
	for _, p := range f.Plan.Points {
		s, err := store.ReadSummary(filepath.Join(f.PointDir(p.Number), store.SummaryFile))
		if err != nil {
			return nil, err
		}
		verdicts[s.Verdict]++
		moves += steps(s)
	}
	alone, same, err := processes(f, dir)
	if err != nil {
		return nil, err
	}
	speed := moves / r.Elapsed.Seconds()
	var b bytes.Buffer
	fmt.Fprintf(&b, "# Scan\n\nWritten by `go run ./bench/scan -write` on %s: %s/%s, "+
		"%d processors.\n\n", time.Now().UTC().Format(time.DateOnly), runtime.GOOS,
		runtime.GOARCH, runtime.NumCPU())
	fmt.Fprintf(&b, "Argon, 4 pressures x 5 amplitudes x 3 gaps, accuracy %g %%, a point a core.\n\n",
		accuracy)
	fmt.Fprintf(&b, "| quantity | value |\n|---|---|\n| points done | %d of %d |\n", r.Done, r.Total)
	fmt.Fprintf(&b, "| time | %.1f min |\n", r.Elapsed.Minutes())
	fmt.Fprintf(&b, "| verdicts | %d ok, %d warn, %d fail |\n", verdicts[store.OK],
		verdicts[store.Warn], verdicts[store.Fail])
	fmt.Fprintf(&b, "| particle moves a second, all cores | %.3g |\n", speed)
	fmt.Fprintf(&b, "| the same of separate processes, %d points at once | %.3g |\n",
		runtime.NumCPU(), alone)
	fmt.Fprintf(&b, "| scan over separate processes | %.1f %% |\n", 100*speed/alone)
	fmt.Fprintf(&b, "| time foreseen after a tenth of the points, off by | %+.1f %% |\n",
		100*(r.Predicted.Seconds()/r.Elapsed.Seconds()-1))
	fmt.Fprintf(&b, "| points run by themselves with the same results, bit for bit | %d of %d |\n",
		same, runtime.NumCPU())
	return b.Bytes(), nil
}

func steps(s *store.Summary) float64 {
	v, _ := s.Provenance["particle_steps"].(float64) // a summary without it counts as none
	return v
}

// processes runs points in the middle of the plan as separate single-threaded processes, all at
// once, and returns their particle moves a second, and how many gave the results of the scan.
func processes(f *scan.Folder, dir string) (speed float64, same int, err error) {
	program := filepath.Join(dir, "ionfall.exe")
	out, err := exec.Command("go", "build", "-o", program, "ionfall/cmd/ionfall").CombinedOutput()
	if err != nil {
		return 0, 0, fmt.Errorf("building the program: %w\n%s", err, out)
	}
	n := runtime.NumCPU()
	speeds, errs, equal := make([]float64, n), make([]error, n), make([]bool, n)
	var all sync.WaitGroup
	for k := range n {
		number := f.Plan.Points[(2*k+1)*len(f.Plan.Points)/(2*n)].Number
		all.Go(func() { speeds[k], equal[k], errs[k] = process(f, program, dir, number) })
	}
	all.Wait()
	for k := range n {
		speed += speeds[k]
		if equal[k] {
			same++
		}
	}
	return speed, same, errors.Join(errs...)
}

func process(f *scan.Folder, program, dir string, number int) (
	speed float64, same bool, err error,
) {
	result := filepath.Join(dir, fmt.Sprintf("alone-%d", number))
	c := exec.Command(program, "run", filepath.Join(f.PointDir(number), "input.yaml"), "--out", result,
		"--cores", "1", "--quiet")
	c.Env = append(os.Environ(), "GOMAXPROCS=1")
	begin := time.Now()
	out, err := c.CombinedOutput()
	took := time.Since(begin).Seconds()
	var exit *exec.ExitError
	if errors.As(err, &exit) && exit.ExitCode() == 3 { // done, with the verdict fail
		err = nil
	}
	if err != nil {
		return 0, false, fmt.Errorf("point %d alone: %w\n%s", number, err, out)
	}
	alone, err := store.ReadSummary(filepath.Join(result, store.SummaryFile))
	if err != nil {
		return 0, false, err
	}
	inScan, err := store.ReadSummary(filepath.Join(f.PointDir(number), store.SummaryFile))
	if err != nil {
		return 0, false, err
	}
	a, err := json.Marshal(alone.Results)
	if err != nil {
		return 0, false, err
	}
	b, err := json.Marshal(inScan.Results)
	return steps(alone) / took, bytes.Equal(a, b), err
}
