package main

import (
	"fmt"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/report"
	"ionfall/internal/store"
)

func (p *program) plotCommand() *cli.Command {
	var ids []string
	for _, k := range report.Kinds() {
		ids = append(ids, k.ID)
	}
	list := ""
	for group := range slices.Chunk(ids, 6) {
		list += "\n   " + strings.Join(group, ", ")
	}
	return &cli.Command{
		Name:  "plot",
		Usage: "one figure for a paper, of one run or of several laid over each other",
		ArgsUsage: "DIR... FIGURE --out FILE [--electrode NAME] [--species NAME] " +
			"[--measured FILE]",
		Description: `FILE ends in .svg, .pdf or .png. FIGURE is one of` + list + `
--measured lays points of a CSV file over it: x, y in the units of the axes and, if known, the
standard error of y. It may be given several times. A run whose verdict is fail is stamped.`,
		Flags: []cli.Flag{
			&cli.StringFlag{
				Name: "out", Aliases: []string{"o"},
				Usage: "write to the new file `FILE`; its ending tells the format",
			},
			&cli.StringFlag{
				Name:  "electrode",
				Usage: "`NAME` is powered or grounded (default: the substrate)",
			},
			&cli.StringFlag{Name: "species", Usage: "only the kind of particle `NAME`, as Ar+"},
			&cli.StringFlag{Name: "region", Usage: "only this part `NAME` of the gap, of eepf"},
			&cli.StringSliceFlag{Name: "measured", Usage: "lay the points in `FILE` over it"},
			&cli.StringFlag{
				Name:  "width",
				Usage: "width `W` in mm (default: 85, a column of many journals)",
			},
			&cli.StringFlag{Name: "scale", Usage: "`S` is linear or log, for the upright axis"},
		},
		Action: p.plot,
	}
}

func (p *program) plot(c *cli.Context) error {
	v := values{c: c}
	paper := paperOptions(&v)
	if err := v.bad.Err(); err != nil {
		return err
	}
	if err := absent(c, c.String("out")); err != nil {
		return err
	}
	kind, runs, err := plotted(c)
	if err != nil {
		return err
	}
	f, err := oneFigure(c, kind, runs)
	if err != nil {
		return err
	}
	for _, path := range c.StringSlice("measured") {
		if f.Map != nil || f.Bars != nil {
			return usagef("plot: points cannot be laid over %s", kind.ID)
		}
		s, err := report.ReadMeasured(path)
		if err != nil {
			return err
		}
		f.Series = append(f.Series, s)
	}
	data, err := f.Draw(paper)
	if err != nil {
		return err
	}
	return store.WriteFile(c.String("out"), data)
}

// paperOptions reads what the flags say about the drawing.
func paperOptions(v *values) report.Paper {
	paper := report.Paper{Width: report.ColumnWidth}
	out := v.c.String("out")
	paper.Format = strings.ToLower(strings.TrimPrefix(filepath.Ext(out), "."))
	if !slices.Contains([]string{"svg", "pdf", "png"}, paper.Format) {
		v.fail("out", out, "a file that ends in .svg, .pdf or .png")
	}
	if v.c.IsSet("width") {
		w, err := strconv.ParseFloat(strings.TrimSuffix(v.c.String("width"), "mm"), 64)
		if err != nil || !(w >= 40 && w <= 400) {
			v.fail("width", v.c.String("width"), "a number from 40 to 400, in mm")
		}
		paper.Width = w
	}
	if v.c.IsSet("scale") {
		log := v.c.String("scale") == "log"
		if !log && v.c.String("scale") != "linear" {
			v.fail("scale", v.c.String("scale"), "linear or log")
		}
		paper.LogY = &log
	}
	if e := v.c.String("electrode"); e != "" && e != "powered" && e != "grounded" {
		v.fail("electrode", e, "powered or grounded")
	}
	return paper
}

// plotted finds the figure among the arguments; the others are results folders.
func plotted(c *cli.Context) (report.Kind, []*report.Run, error) {
	var none report.Kind
	given := c.Args().Slice()
	at := slices.IndexFunc(given, func(word string) bool {
		_, err := report.FindKind(word)
		return err == nil
	})
	switch {
	case len(given) < 2:
		return none, nil, usagef("plot: want a results folder and a figure; for example: " +
			"ionfall plot results/argon ion-energy --out fig.svg")
	case at < 0:
		_, err := report.FindKind(given[len(given)-1])
		return none, nil, usagef("plot: %v", err)
	}
	kind, err := report.FindKind(given[at])
	if err != nil {
		return none, nil, err
	}
	runs, err := openFolders(c, slices.Delete(given, at, at+1))
	return kind, runs, err
}

// oneFigure narrows the figures of a kind to one.
func oneFigure(c *cli.Context, kind report.Kind, runs []*report.Run) (*report.Figure, error) {
	narrow := report.Select{
		Electrode: c.String("electrode"), Species: c.String("species"),
		Region: c.String("region"),
	}
	figures, err := kind.Figures(runs, narrow)
	if err == nil && len(figures) > 1 && narrow.Electrode == "" {
		narrow.Electrode = runs[0].Substrates()[0]
		figures, err = kind.Figures(runs, narrow)
	}
	if err != nil {
		return nil, usagef("plot: %v", err)
	}
	if len(figures) > 1 {
		var titles []string
		for _, f := range figures {
			titles = append(titles, f.Title)
		}
		return nil, usagef("plot: %d figures (%s): want one; narrow it with --species, or "+
			"give one run", len(figures), strings.Join(titles, "; "))
	}
	if len(figures) == 0 {
		return nil, fmt.Errorf("plot: no figure %s", kind.ID)
	}
	return &figures[0], nil
}
