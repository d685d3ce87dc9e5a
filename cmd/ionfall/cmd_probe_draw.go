package main

import (
	"fmt"
	"os"
	"path/filepath"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/probe"
	"ionfall/internal/store"
)

func (p *program) probeDrawCommand() *cli.Command {
	return &cli.Command{
		Name:      "draw",
		Usage:     "make the sweeps that a probe or an analyser would give in a simulated plasma",
		ArgsUsage: "RUN PROBE.yaml [--points N] [--sweeps N] [--noise PART] [--seed N]",
		Description: `Writes the files of sweeps that PROBE.yaml names, which must not exist, with noise:
to plan a measurement, and to see whether it would tell what is to be known. RUN is a results
folder or a scan, as for compare. The files say that they are synthetic.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "points", Usage: "`N` points a sweep (default: 300)"},
			&cli.StringFlag{Name: "sweeps", Usage: "`N` sweeps, up and down (default: 2)"},
			measureFlag("noise", "`PART` of each current, and a tenth of it of the largest one "+
				"(default: 0.5 %)", config.MeasureRatio),
			libraryFlag(alsoLibrary),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
		},
		Action: p.probeDraw,
	}
}

func (p *program) probeDraw(c *cli.Context) error {
	given := c.Args().Slice()
	if len(given) != 2 {
		return usagef("draw: got %d arguments, want a results folder and a description; for example: "+
			"ionfall probe draw results/argon probe.yaml", len(given))
	}
	v := values{c: c}
	library, err := v.gases()
	if err != nil {
		return err
	}
	const usualPoints, usualSweeps, mostPoints, mostSweeps = 300, 2, 20000, 100
	points, sweeps := v.integer("points", mostPoints), v.integer("sweeps", mostSweeps)
	if points == 0 {
		points = usualPoints
	}
	if points < probe.MinPoints {
		v.fail("points", c.String("points"), fmt.Sprintf("%d at least", probe.MinPoints))
	}
	if sweeps == 0 {
		sweeps = usualSweeps
	}
	relative := v.measure("noise", config.MeasureRatio, 0, 0.5, 0.005)
	firstSeed := v.seed()
	noise := probe.Noise{Floor: relative / 10, Relative: relative, Seed: firstSeed}
	if err := v.bad.Err(); err != nil {
		return err
	}
	d, err := readDescription(given[1])
	if err != nil {
		return err
	}
	for i := range d.Probes {
		one := reducedProbe{ProbeDescription: d.Probes[i]}
		one.Sweeps = beside(given[1], one.Sweeps)
		run, err := openAt(&one.Placed, one.Run, given[0], probe.At(one.Setup.Pressure, one.Inputs))
		if err != nil {
			return err
		}
		// Places draw noise of their own.
		noise.Seed = firstSeed + uint64(i)
		if err := one.draw(run, library, points, sweeps, noise); err != nil {
			return err
		}
		p.say("written: " + one.Sweeps)
	}
	for i := range d.Analysers {
		a := &d.Analysers[i]
		run, err := openAt(&a.Placed, a.Run, given[0], probe.At(a.Pressure, a.Inputs))
		if err != nil {
			return err
		}
		ions, err := run.arrival(a.Electrode)
		if err != nil {
			return err
		}
		if a.Analyser.Radius == 0 {
			return usagef("%s: analyser %s: the entrance_radius is needed to draw a current", given[1],
				a.Name)
		}
		sweep := probe.DrawCollector(&a.Analyser, ions, points, noise)
		name := beside(given[1], a.Sweeps)
		if err := writeNew(name, probe.CSV([]probe.Sweep{sweep}, syntheticRemark)); err != nil {
			return err
		}
		p.say("written: " + name)
	}
	return nil
}

const syntheticRemark = "synthetic: drawn from a simulated plasma with invented noise; it is " +
	"no measurement"

func (r *reducedProbe) draw(run *finishedRun, library *gases, points, sweeps int,
	noise probe.Noise,
) error {
	place := probe.Place{Position: r.Position, Across: r.Across}
	if key, got, want := place.Check(&r.Setup, run.input.Gap); key != "" {
		return r.Errorf(key, got, want, "")
	}
	err := library.fillGas(&r.Setup, func(hint string) error {
		return r.Errorf("gas", "", "", hint)
	})
	if err != nil {
		return err
	}
	s, err := run.at(place, &r.Setup)
	if err != nil {
		return err
	}
	list := probe.Draw(s, &r.Setup, points, sweeps, noise)
	return writeNew(r.Sweeps, probe.CSV(list, syntheticRemark))
}

// writeNew writes a file that must not exist.
func writeNew(name string, text []byte) error {
	if _, err := os.Stat(name); err == nil {
		return usagef("%s exists and is not replaced", name)
	}
	if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
		return err
	}
	return store.WriteFile(name, text)
}
