package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/probe"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

func (p *program) probeAdjustCommand() *cli.Command {
	return &cli.Command{
		Name:      "adjust",
		Usage:     "adjust uncertain inputs to probe data, and predict again",
		ArgsUsage: "CASE.yaml PROBE.yaml --free 'PATH(prior)' [--free ...] [--out DIR] ...",
		Description: `A Bayesian estimate: runs spread over the priors of the free inputs, a surrogate
between them, and the data of the probes with their errors and correlations give the posterior; then
more runs where it lies. A prior is a range, gas.temperature(300 K..450 K), or a standard error,
drive.tones.0.amplitude(5 %) or (+- 10 V); yields and reflections have a usual one. A * in a path
stands for all keys there, which get the same value. Finished runs are kept in DIR.points and found
again.`,
		Flags: []cli.Flag{
			&cli.StringSliceFlag{Name: "free", Usage: "free `X`, a path with its prior"},
			&cli.StringSliceFlag{
				Name: "ignore", Usage: "leave `Q` out, as plasma_potential_V",
			},
			&cli.StringFlag{
				Name: "runs", Usage: "`N` runs before the added ones (default: 4, and 3 an input)",
			},
			measureFlag("accuracy", "standard error `E` of flux and energy of a run (default: 3 %)",
				config.MeasureRatio),
			measureFlag("model-error",
				"relative error `E` of what the model leaves out (default: 1 %)", config.MeasureRatio),
			coresFlag(), libraryFlag(alsoLibrary),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
			&cli.StringFlag{Name: "out", Usage: "results `DIR` (default: results/adjust-CASE)"},
			jsonFlag("print the results as JSON"),
		},
		Action: p.probeAdjust,
	}
}

// adjustedProbe is a probe with the keys of its data.
type adjustedProbe struct {
	reducedProbe
	adjusted []string
}

// adjustment is the work of the command.
type adjustment struct {
	caseFile, out string
	library       *gases
	input         *config.Case
	resolved      []byte
	probes        []adjustedProbe
	ignore        []string
	problem       *probe.Problem
	parallel      int
	electrodes    []string // whose ions are predicted
	version       string
	anyVerdict    bool // take runs whose verdict is fail: for tests with coarse numerics
}

func (p *program) probeAdjust(c *cli.Context) error {
	given := c.Args().Slice()
	if len(given) != 2 {
		return usagef("adjust: got %d arguments, want an input and a description; for example: "+
			"ionfall probe adjust argon.yaml probe.yaml --free 'drive.tones.0.amplitude(5 %%)'",
			len(given))
	}
	v := &values{c: c}
	a, runs, err := v.adjustment(given[0])
	if err != nil {
		return err
	}
	if err := a.readProbes(given[1]); err != nil {
		return err
	}
	ctx, stop := p.interruptible(discard{})
	posterior, err := a.work(ctx, runs, p.say)
	stop()
	if ctx.Err() != nil && p.signal != 0 {
		return fmt.Errorf("%w: finished runs are in %s", run.ErrInterrupted, a.points())
	}
	if err != nil {
		return err
	}
	if err := a.keep(posterior); err != nil {
		return err
	}
	if p.asJSON {
		text, err := encodeJSON(a.json(posterior), true)
		if err != nil {
			return err
		}
		err = p.print(text)
		if err == nil && !posterior.Fits() {
			err = errVerdict
		}
		return err
	}
	if err := p.print([]byte(a.text(posterior))); err != nil {
		return err
	}
	if !posterior.Fits() {
		return errVerdict
	}
	return nil
}

// adjustment reads flags and the case.
func (v *values) adjustment(caseFile string) (*adjustment, int, error) {
	a := &adjustment{
		caseFile: caseFile, version: versionText(), parallel: v.integer("cores", maxCores),
	}
	accuracy := v.measure("accuracy", config.MeasureRatio, 1e-4, 0.2, 0.03)
	a.problem = &probe.Problem{
		ModelError: v.measure("model-error", config.MeasureRatio, 0, 0.5, 0.01), Seed: v.seed(),
	}
	a.ignore = v.c.StringSlice("ignore")
	for _, key := range a.ignore {
		if !slices.Contains(adjustKeys(), key) {
			v.fail("ignore", key, "one of "+strings.Join(adjustKeys(), ", "))
		}
	}
	runs := v.integer("runs", 1000)
	a.out = v.text("out", "the name of a folder")
	var err error
	if a.library, err = v.gases(); err != nil {
		return nil, 0, err
	}
	plan, err := run.Prepare(caseFile)
	if err != nil {
		return nil, 0, err
	}
	if a.out == "" {
		a.out = store.NextName(filepath.Join("results", "adjust-"+plan.Name))
	}
	if _, err := os.Stat(a.out); err == nil {
		return nil, 0, fmt.Errorf("%s: %w", a.out, store.ErrExists)
	}
	a.input = plan.Case
	changed := *plan.Case
	changed.Accuracy = config.Accuracy{IonEnergy: accuracy, IonFlux: accuracy}
	if a.resolved, err = changed.Resolved(); err != nil {
		return nil, 0, err
	}
	if err := v.freeInputs(a); err != nil {
		return nil, 0, err
	}
	if runs == 0 {
		runs = 4 + 3*len(a.problem.Inputs)
	}
	if least := 2*len(a.problem.Inputs) + 2; runs < least {
		v.fail("runs", fmt.Sprint(runs), fmt.Sprintf("%d at least", least))
	}
	a.predictions()
	return a, runs, v.bad.Err()
}

// freeInputs reads the free inputs and tries the ends of their priors on the checks of the input.
func (v *values) freeInputs(a *adjustment) error {
	list := v.c.StringSlice("free")
	if len(list) == 0 || len(list) > probe.MaxInputs {
		v.fail("free", strings.Join(list, ", "), fmt.Sprintf("1 to %d free inputs with priors, such as "+
			"'drive.tones.0.amplitude(5 %%)'", probe.MaxInputs))
		return v.bad.Err()
	}
	for _, text := range list {
		f, err := probe.ParseInput(text, a.resolved)
		if err != nil {
			v.fail("free", text, "a free input: "+err.Error())
			continue
		}
		for _, end := range []float64{f.Lo, f.Hi} {
			src, err := probe.With(a.resolved, []probe.Input{*f}, []float64{end})
			if err == nil {
				_, err = config.Parse(f.Path, src)
			}
			if err != nil {
				v.fail("free", text, "a prior of values that the input takes: "+err.Error())
			}
		}
		a.problem.Inputs = append(a.problem.Inputs, *f)
	}
	return v.bad.Err()
}

// adjustKeys are the quantities that inputs are adjusted to. The ion density is not: theory of ion
// collection is less sure than the rest.
func adjustKeys() []string {
	return []string{
		probe.KeyElectronDensity, probe.KeyTemperature, probe.KeyPlasma, probe.KeyFloating,
	}
}

// readProbes reduces the probes and makes the data.
func (a *adjustment) readProbes(file string) error {
	d, err := readDescription(file)
	if err != nil {
		return err
	}
	if len(d.Probes) == 0 {
		return usagef("%s describes no probe", file)
	}
	var blocks [][][]float64
	for i := range d.Probes {
		r := reducedProbe{ProbeDescription: d.Probes[i]}
		r.Sweeps = beside(file, r.Sweeps)
		place := probe.Place{Position: r.Position, Across: r.Across}
		if key, got, want := place.Check(&r.Setup, a.input.Gap); key != "" {
			return r.Errorf(key, got, want, "")
		}
		if err := r.reduce(a.library, probe.Choices{Seed: a.problem.Seed}); err != nil {
			return err
		}
		var keys []string
		for _, key := range adjustKeys() {
			if q := r.result.Get(key); q.Known() && !slices.Contains(a.ignore, key) {
				keys = append(keys, key)
				a.problem.Data = append(a.problem.Data,
					probe.Datum{Key: key, Label: r.Name + ": " + key, Quantity: q})
			}
		}
		blocks = append(blocks, r.result.DataCovariance(keys))
		a.probes = append(a.probes, adjustedProbe{r, keys})
	}
	n := len(a.problem.Data)
	if n == 0 {
		return usagef("%s: the sweeps tell nothing that inputs could be adjusted to", file)
	}
	a.problem.Covariance = make([][]float64, n)
	at := 0
	for _, block := range blocks {
		for i := range block {
			row := make([]float64, n)
			copy(row[at:], block[i])
			a.problem.Covariance[at+i] = row
		}
		at += len(block)
	}
	return nil
}

// predictions are mean energy and flux of the ions at each substrate.
func (a *adjustment) predictions() {
	if a.input.Electrodes.Powered.Substrate {
		a.electrodes = append(a.electrodes, "powered")
	}
	if a.input.Electrodes.Grounded.Substrate {
		a.electrodes = append(a.electrodes, "grounded")
	}
	for _, e := range a.electrodes {
		for _, q := range [][3]string{
			{"ion_mean_energy_eV", "mean ion energy", "eV"}, {"ion_flux_m2ps", "ion flux", "1/(m2 s)"},
		} {
			a.problem.Predicted = append(a.problem.Predicted, probe.Named{
				Key: q[0] + "." + e + ".all", Label: q[1] + ", " + e,
				Quantity: probe.Quantity{Unit: q[2]},
			})
		}
	}
}
