// Command benchmark runs the published helium benchmark of capacitive discharges and compares the
// ion density in mid-plane with the published one:
//
//	go run ./bench/benchmark --case 1 [--helium FILE [--database NAME]] [--set NAME|all]
//	    [--scheme NAME] [--periods N] [--start-density N] [--cores N] [--seed N] [--json]
//	go run ./bench/benchmark --case 1 --fast [--cores N] [--seed N] [--json]
//	go run ./bench/benchmark --record testdata/validation/benchmark.json RESULT.json ...
//
// The answer goes to stdout, progress to stderr. The benchmark prescribes a set of cross sections
// that is not among the bundled ones; --helium reads it from a download in the exchange form.
package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"runtime"
	"time"

	"ionfall/pic"
)

// options are the command line.
type options struct {
	number       int
	file         string
	database     string
	set          string
	scheme       pic.Scheme
	periods      int
	startDensity float64 // [1/m3]; 0 for the published one
	cores        int
	seed         uint64
	json         bool
	fast         bool
	record       string   // file of validation rows; then no run is made
	results      []string // to record
}

const (
	exitFailed = 1
	exitUsage  = 2
)

func main() {
	o, err := parse(os.Args[1:], os.Stderr)
	if errors.Is(err, flag.ErrHelp) {
		return
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "benchmark:", err)
		os.Exit(exitUsage)
	}
	if err := carryOut(o, os.Stdout, os.Stderr); err != nil {
		fmt.Fprintln(os.Stderr, "benchmark:", err)
		os.Exit(exitFailed)
	}
}

// parse reads the command line; usage goes to help.
func parse(args []string, help io.Writer) (*options, error) {
	o := &options{}
	f := flag.NewFlagSet("benchmark", flag.ContinueOnError)
	f.SetOutput(help)
	f.IntVar(&o.number, "case", 1, "case of the benchmark, 1 to 4")
	f.StringVar(&o.file, "helium", "", "file in the exchange form with the electron collisions")
	f.StringVar(&o.database, "database", "", "with --helium: the database, if the file has several")
	f.StringVar(&o.set, "set", "",
		"bundled set: default, phelps, phelps-beb, estimate; all for one after the other")
	scheme := f.String("scheme", pic.MomentumConserving.String(),
		"momentum_conserving (as published) or energy_conserving")
	f.IntVar(&o.periods, "periods", 0, "RF periods (0: as published); the last 32 are averaged")
	f.Float64Var(&o.startDensity, "start-density", 0,
		"density of the start in 1/m3 (0: as published), with the published weight of particles")
	f.IntVar(&o.cores, "cores", runtime.GOMAXPROCS(0), "workers; the result does not depend on it")
	f.Uint64Var(&o.seed, "seed", 1, "seed of the random numbers")
	f.StringVar(&o.record, "record", "",
		"merge finished results, JSON files given as arguments, into this file of validation rows")
	f.BoolVar(&o.fast, "fast", false,
		"numerics and length as the program chooses them, instead of the published ones")
	f.BoolVar(&o.json, "json", false, "print JSON, with the complete profiles")
	if err := f.Parse(args); err != nil {
		return nil, err
	}
	var ok bool
	if o.scheme, ok = findScheme(*scheme); !ok {
		return nil, fmt.Errorf("--scheme: got %q, want %s or %s", *scheme,
			pic.MomentumConserving, pic.EnergyConserving)
	}
	if o.record != "" {
		o.results = f.Args()
		return o, o.check(nil)
	}
	return o, o.check(f.Args())
}

func findScheme(name string) (pic.Scheme, bool) {
	for _, s := range []pic.Scheme{pic.MomentumConserving, pic.EnergyConserving} {
		if s.String() == name {
			return s, true
		}
	}
	return 0, false
}

// check reports everything that is wrong with the values.
func (o *options) check(rest []string) error {
	var list []error
	if len(rest) > 0 {
		list = append(list, fmt.Errorf("got the argument %q, want flags only", rest[0]))
	}
	if _, err := findCase(o.number); err != nil {
		list = append(list, err)
	}
	if o.periods < 0 {
		list = append(list, fmt.Errorf("--periods: got %d, want 0 or more", o.periods))
	}
	if !(o.startDensity >= 0 && o.startDensity <= maxStartDensity) {
		list = append(list, fmt.Errorf("--start-density: got %g /m3, want 0 to %g",
			o.startDensity, maxStartDensity))
	}
	if o.cores < 1 {
		list = append(list, fmt.Errorf("--cores: got %d, want at least 1", o.cores))
	}
	if o.fast && (o.file != "" || o.set != "" || o.periods != 0 || o.startDensity != 0) {
		list = append(list, errors.New("--fast: want no --helium, --set, --periods and --start-density"))
	}
	if o.database != "" && o.file == "" {
		list = append(list, errors.New("--database: want --helium with it"))
	}
	return errors.Join(list...)
}

// maxStartDensity keeps the particles of a start within the memory of a workstation.
const maxStartDensity = 1e17

// carryOut makes the runs that are asked for and prints them.
func carryOut(o *options, out, progress io.Writer) error {
	if o.record != "" {
		return recordRows(o.record, o.results)
	}
	c, err := findCase(o.number)
	if err != nil {
		return err
	}
	if o.fast {
		r, err := c.fast(o, progress)
		if err != nil {
			return err
		}
		return show(o, out, &c, []result{r})
	}
	gases, err := o.gases()
	if err != nil {
		return err
	}
	var list []result
	for _, g := range gases {
		for _, w := range g.warnings {
			if _, err := fmt.Fprintf(progress, "%s: %s\n", g.name, w); err != nil {
				return err
			}
		}
		r, err := c.simulate(g, o, meter{out: progress, every: 10 * time.Second})
		if err != nil {
			return fmt.Errorf("%s: %w", g.name, err)
		}
		list = append(list, r)
	}
	return show(o, out, &c, list)
}

func show(o *options, out io.Writer, c *benchmarkCase, list []result) error {
	if o.json {
		return printJSON(out, list)
	}
	return printText(out, c, list)
}
