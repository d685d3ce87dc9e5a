package main

import (
	"fmt"
	"runtime"
	"strings"
	"time"

	"github.com/urfave/cli/v2"

	"ionfall/internal/progress"
	"ionfall/internal/scan"
)

// mostListed is how many points a table for people shows.
const mostListed = 100

func (p *program) scanCheckCommand() *cli.Command {
	return &cli.Command{
		Name:      "check",
		Usage:     "check a plan and tell its points and what they will take",
		ArgsUsage: "PLAN [--cores N]",
		Description: `Prints every error of the plan and of its inputs with line and column; without
errors, the points, the processor time that each is expected to take (to a factor of 3), and when
they would be done if they were started now. Nothing is run.`,
		Flags:  []cli.Flag{coresFlag()},
		Action: p.scanCheck,
	}
}

func (p *program) scanCheck(c *cli.Context) error {
	v := values{c: c}
	cores := v.integer("cores", maxCores)
	plan, _, err := v.scanOf("ionfall scan check pressure.yaml")
	if err != nil {
		return err
	}
	_, cost, err := plan.Prepare()
	if err != nil {
		return err
	}
	if cores == 0 {
		cores = runtime.NumCPU()
	}
	rows := [][]string{append(append([]string{"point"}, axisNames(plan)...), "expected time")}
	total := 0.0
	for i, point := range plan.Points {
		total += cost[i]
		if i < mostListed {
			row := append([]string{fmt.Sprint(point.Number)}, shortTexts(point)...)
			rows = append(rows, append(row, progress.Digits(cost[i], 2)+" s"))
		}
	}
	var b strings.Builder
	b.WriteString(align(rows))
	if n := len(plan.Points); n > mostListed {
		fmt.Fprintf(&b, "... and %d more\n", n-mostListed)
	}
	wall := time.Duration(total / float64(cores) * float64(time.Second))
	fmt.Fprintf(&b, "\n%d points, no errors; %s s of processor time, to a factor of 3\n",
		len(plan.Points), progress.Digits(total, 2))
	fmt.Fprintf(&b, "on %d cores about %s: started now, done about %s\n", cores, around(wall),
		time.Now().Add(wall).Format("Mon 15:04"))
	return p.print([]byte(b.String()))
}

func axisNames(plan *scan.Plan) []string {
	var list []string
	for _, a := range plan.Axes {
		list = append(list, a.Path)
	}
	return list
}

// around is a time for people: 40 s, 12 min, 3.5 h.
func around(d time.Duration) string {
	switch {
	case d < 90*time.Second:
		return fmt.Sprintf("%.0f s", d.Seconds())
	case d < 90*time.Minute:
		return fmt.Sprintf("%.0f min", d.Minutes())
	case d < 48*time.Hour:
		return fmt.Sprintf("%.1f h", d.Hours())
	}
	return fmt.Sprintf("%.1f days", d.Hours()/24)
}
