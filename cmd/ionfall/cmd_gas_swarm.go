package main

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/crosssections"
	"ionfall/internal/progress"
	"ionfall/internal/run"
	"ionfall/internal/store"
	"ionfall/mcc"
)

func (p *program) gasSwarmCommand() *cli.Command {
	return &cli.Command{
		Name:  "swarm",
		Usage: "transport coefficients of electrons or ions of a gas in uniform fields",
		ArgsUsage: "GAS[/SET] --field 10,20,50 Td [--species Ar+] [--temperature 300 K]\n" +
			"      [--accuracy 1%] [--library DIR] [--cores N] [--seed N] [--out DIR] [--json]",
		Description: `Follows a swarm of particles in each reduced field E/N, with the collisions of a
run, until mean energy and flux drift velocity are known to the accuracy. Comparing the results
with measured ones tells whether a set of cross sections can be believed. With --out, DIR gets the
tables swarm.parquet (a row a field) and eepf.parquet (energy distributions). An interrupt prints
the fields that are done, and no tables are written.`,
		Flags: []cli.Flag{
			&quantityFlag{&cli.StringFlag{
				Name: "field", Usage: "the reduced fields `E/N`, as 10,20,50 Td",
			}, []string{"Td"}},
			&cli.StringFlag{
				Name: "species", Usage: "follow this `SPECIES`: e (default) or an ion such as Ar+",
			},
			&quantityFlag{&cli.StringFlag{
				Name: "temperature", Usage: "temperature `T` of the gas (default: 300 K)",
			}, []string{"K", "C", "°C", "degC"}},
			&quantityFlag{&cli.StringFlag{
				Name: "accuracy", Usage: "go on to this relative error `E` (default: 1%)",
			}, []string{"%", "ppm"}},
			libraryFlag(alsoLibrary), coresFlag(),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
			&cli.StringFlag{
				Name: "out", Usage: "put the tables into the folder `DIR`, which must not exist",
			},
			jsonFlag("print the coefficients as JSON"),
		},
		Action: p.gasSwarm,
	}
}

// maxFields is far more than anybody waits for.
const maxFields = 1000

// maxSeed is the largest seed that the command line takes.
const maxSeed = math.MaxInt

// swarmDensity is that of the gas [1/m3]: any value gives the same coefficients.
const swarmDensity = 1e23

func (p *program) gasSwarm(c *cli.Context) error {
	v := values{c: c}
	job := v.swarmJob()
	out := v.text("out", "the name of a folder")
	library, err := v.gases()
	if err != nil {
		return err
	}
	name, err := argument(c, "name of a GAS", "ionfall gas swarm Ar --field 10,20,50 Td")
	if err != nil {
		return err
	}
	if job.gas, err = library.find("swarm", name); err != nil {
		return err
	}
	if err := job.checkSpecies(); err != nil {
		return err
	}
	var folder *store.Run
	if out != "" {
		if folder, err = store.Create(out); err != nil {
			return err
		}
	}
	ctx, stop := p.interruptible(discard{})
	done, failed := job.run(ctx, p.tellSwarm)
	stop()
	if ctxErr := ctx.Err(); ctxErr != nil && p.signal != 0 {
		failed = fmt.Errorf("%w: %d of %d fields are done", run.ErrInterrupted,
			len(done), len(job.fields))
	}
	if folder != nil {
		err = job.keep(folder, done, failed)
	}
	if len(done) > 0 {
		err = errors.Join(err, p.printSwarm(job, done, out, failed))
	}
	return errors.Join(failed, err)
}

// discard takes what is told about checkpoints: a swarm has none.
type discard struct{}

// Write forgets the text.
func (discard) Write(text []byte) (int, error) { return len(text), nil }

// swarmJob reads the flags; what is wrong with them is noted.
func (v *values) swarmJob() *swarmJob {
	job := &swarmJob{
		species: crosssections.ElectronName, temperature: 300, accuracy: 0.01, seed: 1,
		cores: v.integer("cores", maxCores), fields: v.fields("field"),
	}
	if s := v.text("species", "e or an ion such as Ar+"); s != "" {
		job.species = s
	}
	const gas = "gas: {pressure: 5 Pa, mixture: {Ar: 1}, temperature: %s}"
	if asked := v.quantity("temperature", gas); asked != nil {
		job.temperature = asked.Gas.Temperature
	}
	if asked := v.quantity("accuracy", "accuracy: {ion_energy: %s}"); asked != nil {
		job.accuracy = asked.Accuracy.IonEnergy
	}
	if n := v.integer("seed", maxSeed); n > 0 {
		job.seed = uint64(n)
	}
	return job
}

// fields reads reduced fields [Td], of which at least the last says its unit.
func (v *values) fields(flag string) []float64 {
	text := v.c.String(flag)
	want := fmt.Sprintf("1 to %d fields from 0 to 1e6 Td, such as 10,20,50 Td", maxFields)
	var list []float64
	parts := strings.Split(text, ",")
	for i, part := range parts {
		number, hasUnit := strings.CutSuffix(strings.TrimSpace(part), "Td")
		e, err := strconv.ParseFloat(strings.TrimSpace(number), 64)
		if err != nil || !(e >= 0 && e <= 1e6) || len(parts) > maxFields ||
			i == len(parts)-1 && !hasUnit {
			v.fail(flag, text, want)
			return nil
		}
		if slices.Contains(list, e) {
			v.fail(flag, text, "each field once")
			return nil
		}
		list = append(list, e)
	}
	return list
}

// checkSpecies wants a species that the gas has collisions of.
func (j *swarmJob) checkSpecies() error {
	var known []string
	for _, q := range processes(j.gas) {
		if !slices.Contains(known, q.Projectile) {
			known = append(known, q.Projectile)
		}
	}
	if slices.Contains(known, j.species) {
		return nil
	}
	return usagef("--species: got %q, want one of those with collisions in %s: %s", j.species,
		j.gas.Name, strings.Join(known, ", "))
}

// tellSwarm reports a field that is done.
func (p *program) tellSwarm(r *mcc.SwarmResult, done, of int) {
	if p.asJSON || of == 1 {
		return
	}
	p.say(fmt.Sprintf("%g Td: mean energy %s eV (%d of %d)", r.Field,
		progress.WithError(r.MeanEnergy.Mean, r.MeanEnergy.StdErr), done, of))
}

// keep writes the tables when every field is done; otherwise it takes the folder away again.
func (j *swarmJob) keep(folder *store.Run, done []mcc.SwarmResult, failed error) error {
	if failed != nil {
		// Nothing has been written into it.
		err := os.Remove(folder.Path(""))
		return errors.Join(err, folder.Close())
	}
	meta := j.meta()
	for _, t := range swarmTables(done) {
		if err := folder.WriteTable(t, meta); err != nil {
			return errors.Join(err, folder.Close())
		}
	}
	return folder.Commit()
}

func (p *program) printSwarm(j *swarmJob, done []mcc.SwarmResult, out string, failed error) error {
	if p.asJSON {
		var list []swarmJSON
		for i := range done {
			list = append(list, j.json(&done[i]))
		}
		text, err := encodeJSON(list, true)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	text := j.text(done)
	if out != "" && failed == nil {
		text += "\ntables: " + out + "\n"
	}
	return p.print([]byte(text))
}

// swarmJob is a swarm of one species in several fields.
type swarmJob struct {
	gas         *crosssections.Gas
	species     string
	fields      []float64 // E/N [Td]
	temperature float64   // [K]
	accuracy    float64
	seed        uint64
	cores       int // 0 for all
}

// run follows the swarms, several at once, and returns those that came to an end, in the order
// asked for, with what went wrong with the others.
func (j *swarmJob) run(ctx context.Context, tell func(r *mcc.SwarmResult, done, of int)) (
	[]mcc.SwarmResult, error,
) {
	results := make([]mcc.SwarmResult, len(j.fields))
	errs := make([]error, len(j.fields))
	j.inParallel(func(i, workers int) {
		results[i], errs[i] = mcc.Swarm(ctx, []mcc.Background{{
			Gas: j.gas, Density: swarmDensity, Temperature: j.temperature,
		}}, mcc.SwarmSettings{
			Projectile: j.species, Charge: j.charge(), Field: j.fields[i],
			RelativeError: j.accuracy, Seed: j.seed, Workers: workers,
		})
	}, func(i, done int) {
		if errs[i] == nil {
			tell(&results[i], done, len(j.fields))
		}
	})
	var ended []mcc.SwarmResult
	for i := range results {
		if errs[i] == nil {
			ended = append(ended, results[i])
		}
	}
	return ended, errors.Join(errs...)
}

func (j *swarmJob) charge() int {
	if ion, ok := j.gas.Ion(j.species); ok {
		return ion.Charge
	}
	return -1
}
