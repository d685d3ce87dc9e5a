package main

import (
	"encoding/csv"
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/progress"
	"ionfall/internal/scan"
	"ionfall/internal/table"
)

func (p *program) scanStatusCommand() *cli.Command {
	return &cli.Command{
		Name:      "status",
		Usage:     "tell how far a scan is",
		ArgsUsage: "PLAN [--out DIR]",
		Description: `Judges by the folders of the points alone, whoever works at them. It changes
nothing.`,
		Flags:  []cli.Flag{scanOutFlag()},
		Action: p.scanStatus,
	}
}

func (p *program) scanStatus(c *cli.Context) error {
	v := values{c: c}
	f, err := v.begunScan("ionfall scan status pressure.yaml")
	if err != nil {
		return err
	}
	t, err := f.Table()
	if err != nil {
		return err
	}
	status, err := t.Texts("status")
	if err != nil {
		return err
	}
	reason, err := t.Texts("reason")
	if err != nil {
		return err
	}
	var b strings.Builder
	rows := [][]string{}
	for _, state := range []string{
		scan.Done, scan.Running, scan.Interrupted, scan.Waiting, scan.Failed,
	} {
		var numbers []string
		for i, s := range status {
			if s == state {
				numbers = append(numbers, strconv.Itoa(f.Plan.Points[i].Number))
			}
		}
		row := []string{state, strconv.Itoa(len(numbers))}
		if state != scan.Done && len(numbers) > 0 && len(numbers) <= mostListed {
			row = append(row, "points "+strings.Join(numbers, ", "))
		}
		rows = append(rows, row)
	}
	b.WriteString(align(rows))
	for i, r := range reason {
		if r != "" {
			fmt.Fprintf(&b, "point %d: %s\n", f.Plan.Points[i].Number, r)
		}
	}
	return p.print([]byte(b.String()))
}

func (p *program) scanTableCommand() *cli.Command {
	return &cli.Command{
		Name:      "table",
		Usage:     "print the points of a scan with their results",
		ArgsUsage: "DIR [--out DIR] [--columns PATH,PATH] [--csv]",
		Description: `Prints what varies, the verdict, and ion energy and flux at the substrates; with
--columns, other results, named as in summary.json: ion_mean_energy_eV.grounded.all. With --csv,
every column of points.parquet, which is renewed before.`,
		Flags: []cli.Flag{
			scanOutFlag(),
			&cli.StringFlag{Name: "columns", Usage: "show the results `PATH,PATH` instead"},
			&cli.BoolFlag{
				Name: "csv", Usage: "print all columns as comma-separated values",
				DisableDefaultText: true,
			},
		},
		Action: p.scanTable,
	}
}

func (p *program) scanTable(c *cli.Context) error {
	v := values{c: c}
	columns := v.text("columns", "names of results")
	f, err := v.begunScan("ionfall scan table scans/pressure")
	if err != nil {
		return err
	}
	ctx, stop := p.interruptible(p.stderr)
	t, err := f.Collect(ctx)
	stop()
	if err != nil {
		return err
	}
	if c.Bool("csv") {
		text, err := csvText(t)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	paths := []string{"ion_mean_energy_eV.grounded.all", "ion_flux_m2ps.grounded.all"}
	if columns != "" {
		paths = strings.Split(columns, ",")
	}
	text, err := scanRows(f.Plan, t, paths)
	if err != nil {
		return err
	}
	text += "\ntable: " + filepath.Join(f.Dir, "points.parquet") + "\n\n" + caution + "\n"
	return p.print([]byte(text))
}

// scanRows is the table for people: untrusted points keep their verdict beside their results.
func scanRows(plan *scan.Plan, t *table.Table, paths []string) (string, error) {
	status, err := t.Texts("status")
	if err != nil {
		return "", err
	}
	verdict, err := t.Texts("verdict")
	if err != nil {
		return "", err
	}
	head := append(append([]string{"point"}, axisNames(plan)...), "verdict")
	rows := [][]string{append(head, paths...)}
	done := slices.Contains(status, scan.Done)
	for i, point := range plan.Points {
		row := append([]string{strconv.Itoa(point.Number)}, shortTexts(point)...)
		if status[i] != scan.Done {
			rows = append(rows, append(row, status[i]))
			continue
		}
		row = append(row, verdict[i])
		for _, path := range paths {
			value, err := t.Floats(strings.TrimSpace(path))
			if err != nil && done {
				return "", usagef("table: %v", err)
			}
			se, err := t.Floats(strings.TrimSpace(path) + "_se")
			if err != nil {
				return "", usagef("table: %v", err)
			}
			row = append(row, progress.WithError(value[i], se[i]))
		}
		rows = append(rows, row)
	}
	return align(rows), nil
}

// shortTexts are the values of a point with six digits.
func shortTexts(point scan.Point) []string {
	list := make([]string, len(point.Texts))
	for i, text := range point.Texts {
		number, unit, _ := strings.Cut(text, " ")
		v, err := strconv.ParseFloat(number, 64)
		if err != nil {
			list[i] = text
			continue
		}
		list[i] = strings.TrimSpace(strconv.FormatFloat(v, 'g', 6, 64) + " " + unit)
	}
	return list
}

// csvText is a table with all digits; what has no value is empty.
func csvText(t *table.Table) ([]byte, error) {
	var b strings.Builder
	w := csv.NewWriter(&b)
	record := make([]string, len(t.Columns))
	for k, c := range t.Columns {
		record[k] = c.Name
	}
	err := w.Write(record)
	for i := 0; i < t.Rows() && err == nil; i++ {
		for k, c := range t.Columns {
			switch {
			case c.Text != nil:
				record[k] = c.Text[i]
			case c.Int != nil:
				record[k] = strconv.FormatInt(c.Int[i], 10)
			case math.IsNaN(c.Float[i]):
				record[k] = ""
			default:
				record[k] = strconv.FormatFloat(c.Float[i], 'g', -1, 64)
			}
		}
		err = w.Write(record)
	}
	w.Flush()
	if err == nil {
		err = w.Error()
	}
	return []byte(b.String()), err
}
