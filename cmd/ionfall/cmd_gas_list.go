package main

import (
	"fmt"
	"strings"

	"github.com/urfave/cli/v2"
)

func (p *program) gasListCommand() *cli.Command {
	return &cli.Command{
		Name:      "list",
		Usage:     "list the gases, their sets of cross sections and where these come from",
		ArgsUsage: "[--library DIR] [--json]",
		Description: `The status tells how a table was obtained: read from a document or data file,
computed from a published formula, derived from other tables, or from memory: recalled, and not
checked against a source.`,
		Flags:  []cli.Flag{libraryFlag(alsoLibrary), jsonFlag("print it as JSON")},
		Action: p.gasList,
	}
}

// listedGas is a gas with its default set.
type listedGas struct {
	Name      string   `json:"name"`
	Title     string   `json:"title"`
	From      string   `json:"from"`
	Sets      []string `json:"sets"`
	Ions      []string `json:"ions"`
	Processes int      `json:"processes"`
	Status    string   `json:"status"`
}

func (p *program) gasList(c *cli.Context) error {
	if err := noArgument(c); err != nil {
		return err
	}
	v := values{c: c}
	library, err := v.gases()
	if err != nil {
		return err
	}
	var list []listedGas
	for _, name := range library.all.Names() {
		g, err := library.all.Gas(name)
		if err != nil {
			return err
		}
		list = append(list, listedGas{
			Name: name, Title: g.Title, From: library.from(name), Sets: g.Sets, Ions: ionNames(g),
			Processes: len(processes(g)), Status: statusText(processes(g)),
		})
	}
	if p.asJSON {
		text, err := encodeJSON(list, true)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	rows := [][]string{{"gas", "", "from", "ions", "processes", "status", "sets"}}
	for _, g := range list {
		ions := strings.Join(g.Ions, ", ")
		if ions == "" {
			ions = "none"
		}
		rows = append(rows, []string{
			g.Name, g.Title, g.From, ions, fmt.Sprint(g.Processes), g.Status,
			strings.Join(g.Sets, ", "),
		})
	}
	return p.print([]byte(align(rows)))
}
