package main

import (
	"fmt"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/store"
)

func (p *program) scanMapCommand() *cli.Command {
	return &cli.Command{
		Name:  "map",
		Usage: "draw a result against one or two of the inputs that vary",
		ArgsUsage: "DIR --of PATH [--against INPUT[,INPUT]] [--at INPUT=VALUE] --svg FILE\n" +
			"      [--out DIR]",
		Description: `Draws a contour map, or with one input a curve with error bars. Points that
failed or are not trusted are marked, and neither coloured nor joined with others. Inputs that are
not drawn against are held at one value each: --at chooses it.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "of", Usage: "draw the result `PATH`, as ion_flux_m2ps.grounded.all"},
			&cli.StringFlag{
				Name: "against", Usage: "draw it against `INPUT,INPUT` (default: the first two)",
			},
			&cli.StringSliceFlag{
				Name: "at", Usage: "hold another input at `X`, as gap=40mm",
			},
			&cli.StringFlag{Name: "svg", Usage: "write the picture to `FILE`, replacing it"},
			scanOutFlag(),
		},
		Action: p.scanMap,
	}
}

func (p *program) scanMap(c *cli.Context) error {
	v := values{c: c}
	of, file := v.text("of", "the name of a result"), v.text("svg", "the name of a file")
	against := v.text("against", "the names of one or two inputs")
	f, err := v.begunScan("ionfall scan map scans/pressure --of ion_flux_m2ps.grounded.all " +
		"--svg f.svg")
	if err != nil {
		return err
	}
	if of == "" || file == "" {
		return usagef("map: want --of PATH and --svg FILE")
	}
	var axes []string
	if against != "" {
		for _, name := range strings.Split(against, ",") {
			axes = append(axes, strings.TrimSpace(name))
		}
	}
	at := map[string]string{}
	for _, text := range c.StringSlice("at") {
		name, value, ok := strings.Cut(text, "=")
		if !ok {
			return usagef("--at: got %q, want INPUT=VALUE", text)
		}
		at[strings.TrimSpace(name)] = strings.TrimSpace(value)
	}
	t, err := f.Table()
	if err != nil {
		return err
	}
	m, err := f.Map(t, of, axes, at)
	if err != nil {
		return usagef("map: %v", err)
	}
	picture, err := m.SVG()
	if err != nil {
		return err
	}
	if err := store.WriteFile(file, picture); err != nil {
		return err
	}
	return p.print(fmt.Appendf(nil, "%d points in %s\n", len(m.Points), file))
}
