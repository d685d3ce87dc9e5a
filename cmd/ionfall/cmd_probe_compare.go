package main

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/probe"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

func (p *program) probeCompareCommand() *cli.Command {
	return &cli.Command{
		Name:      "compare",
		Usage:     "put measurements beside a simulation of the same discharge",
		ArgsUsage: "RUN PROBE.yaml [--out DIR] [--library DIR] [--seed N] [--json]",
		Description: `Reduces the sweeps, averages the results of RUN over the volume of each tip with the
same definitions, and draws the current that such a probe would draw in the simulated plasma. RUN is
a results folder, or a folder of a scan, of which each probe and analyser takes the point with its
pressure and inputs; those that name their own run need none. With --out, DIR gets tables, figures
and comparison.html, and the report of each run a section.`,
		Flags: []cli.Flag{
			&cli.StringFlag{
				Name: "out", Usage: "put tables, figures and a page into the folder `DIR`",
			},
			libraryFlag(alsoLibrary),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
			jsonFlag("print the comparison as JSON"),
		},
		Action: p.probeCompare,
	}
}

// comparedProbe is a probe with what a run says about its place.
type comparedProbe struct {
	reducedProbe
	run        string
	simulated  *probe.Simulated
	comparison *probe.Comparison
}

func (p *program) probeCompare(c *cli.Context) error {
	given := c.Args().Slice()
	if len(given) == 0 || len(given) > 2 {
		return usagef("compare: got %d arguments, want a results folder and a description; for "+
			"example: ionfall probe compare results/argon probe.yaml", len(given))
	}
	file := given[len(given)-1]
	folder := ""
	if len(given) == 2 {
		folder = given[0]
	}
	v := values{c: c}
	library, err := v.gases()
	if err != nil {
		return err
	}
	choices := probe.Choices{Seed: v.seed()}
	out := v.text("out", "the name of a folder")
	if err := v.bad.Err(); err != nil {
		return err
	}
	d, err := readDescription(file)
	if err != nil {
		return err
	}
	var list []comparedProbe
	for i := range d.Probes {
		one := comparedProbe{reducedProbe: reducedProbe{ProbeDescription: d.Probes[i]}}
		one.Sweeps = beside(file, one.Sweeps)
		one.run, err = runOf(&one.Placed, one.Run, folder, probe.At(one.Setup.Pressure, one.Inputs))
		if err != nil {
			return err
		}
		if err := one.compare(library, choices); err != nil {
			return err
		}
		list = append(list, one)
	}
	analysers, err := compareAnalysers(d, file, folder, choices)
	if err != nil {
		return err
	}
	if out != "" {
		if err := keepComparisons(out, list, analysers); err != nil {
			return err
		}
		p.recordBeside(list, analysers)
	}
	return p.printComparisons(list, analysers)
}

// finishedRun is what a comparison reads of a results folder.
type finishedRun struct {
	dir     string
	input   *config.Case
	summary *store.Summary
}

func openRun(dir string) (*finishedRun, error) {
	folder, whole, err := store.Locate(dir)
	if err != nil {
		return nil, usagef("%v", err)
	}
	if !whole {
		return nil, usagef("%s is a run in progress; want a finished one: ionfall resume %s", dir, dir)
	}
	r := &finishedRun{dir: folder}
	r.summary, err = store.ReadSummary(filepath.Join(folder, store.SummaryFile))
	if err != nil {
		return nil, err
	}
	r.input, _, err = config.Load(filepath.Join(folder, "resolved.yaml"))
	return r, err
}

// at reads the simulated quantities at the place of a tip.
func (r *finishedRun) at(place probe.Place, setup *probe.Setup) (*probe.Simulated, error) {
	profiles, err := store.ReadTable(filepath.Join(r.dir, "profiles.parquet"))
	if err != nil {
		return nil, err
	}
	energies, err := store.ReadTable(filepath.Join(r.dir, "electron_energy.parquet"))
	if err != nil {
		return nil, err
	}
	s, err := probe.NewSimulated(profiles, energies, place, setup)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", r.dir, err)
	}
	s.Verdict = r.summary.Verdict
	return s, nil
}

// compare reads the run, reduces the sweeps and puts both together.
func (o *comparedProbe) compare(library *gases, choices probe.Choices) error {
	run, err := openRun(o.run)
	if err != nil {
		return err
	}
	place := probe.Place{Position: o.Position, Across: o.Across}
	if key, got, want := place.Check(&o.Setup, run.input.Gap); key != "" {
		return o.Errorf(key, got, want, "")
	}
	if err := o.reduce(library, choices); err != nil {
		return err
	}
	if o.simulated, err = run.at(place, &o.Setup); err != nil {
		return err
	}
	o.comparison = probe.Compare(o.result, o.simulated, &o.Setup)
	if p := o.Setup.Pressure; p > 0 && math.Abs(p/run.input.Gas.Pressure-1) > 0.02 {
		o.comparison.Cautions = append(o.comparison.Cautions, fmt.Sprintf("the sweeps were taken at "+
			"%.4g Pa, the run is at %.4g Pa", p, run.input.Gas.Pressure))
	}
	return nil
}

func (p *program) printComparisons(list []comparedProbe, analysers []comparedAnalyser) error {
	if p.asJSON {
		text, err := encodeJSON(comparisonsJSON(list, analysers), true)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	var parts []string
	for i := range list {
		parts = append(parts, list[i].compareText())
	}
	for i := range analysers {
		parts = append(parts, analysers[i].text())
	}
	return p.print([]byte(strings.Join(parts, "\n") + "\n" + caution + "\n"))
}

// compareText is the table of a comparison and its verdict.
func (o *comparedProbe) compareText() string {
	c := o.comparison
	rows := [][]string{{"", "", "measured", "simulated", "sigma"}}
	for i := range c.Rows {
		r := &c.Rows[i]
		sigma := "-"
		if z := r.Sigma(); !math.IsNaN(z) {
			sigma = fmt.Sprintf("%+.1f", z)
		}
		rows = append(rows, []string{
			r.Label, r.Unit, quantityCell(r.Measured), quantityCell(r.Simulated), sigma,
		})
	}
	text := fmt.Sprintf("%s, at %.4g mm, against %s\n\n%s\n%s\n", o.Name, 1e3*o.Position, o.run,
		align(rows), c.Verdict)
	if c.Points > 0 {
		text += fmt.Sprintf("currents of %d points differ by %s joint errors (root mean square), %s "+
			"with plasma potentials laid on each other\n", c.Points, progress.Digits(c.RMS, 2),
			progress.Digits(c.Aligned, 2))
	}
	text += "region of the simulated distribution: " + o.simulated.Region + "\n"
	for _, w := range c.Cautions {
		text += "caution: " + w + "\n"
	}
	return text
}
