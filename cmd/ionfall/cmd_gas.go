package main

import (
	"errors"
	"fmt"
	"maps"
	"slices"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/crosssections"
	"ionfall/internal/inputerr"
	"ionfall/internal/run"
)

func (p *program) gasCommand() *cli.Command {
	c := &cli.Command{
		Name:      "gas",
		Usage:     "show, check and import the cross sections of gases",
		ArgsUsage: "COMMAND",
		Description: `The gases that come with the program can be joined by your own: a folder with a
folder for each gas, which gas import makes, and which the input names as gas.library.`,
		Subcommands: []*cli.Command{
			p.gasListCommand(), p.gasShowCommand(), p.gasSwarmCommand(), p.gasImportCommand(),
		},
	}
	c.Action = func(*cli.Context) error {
		return usagef("gas: no command given, want one of %s; for example: ionfall gas list",
			strings.Join(names(c.Subcommands), ", "))
	}
	return c
}

func libraryFlag(usage string) cli.Flag {
	return &cli.StringFlag{Name: "library", Usage: usage}
}

const alsoLibrary = "look also, and first, among your own gases in the folder `DIR`"

// gases are those that a command may choose from.
type gases struct {
	all *crosssections.Library
	own *crosssections.Library // nil without --library
	dir string                 // of the own ones
}

// gases opens the bundled gases and, with --library, those of the user before them.
func (v *values) gases() (*gases, error) {
	dir := v.text("library", "a folder of gases")
	if err := v.bad.Err(); err != nil {
		return nil, err
	}
	bundled, err := crosssections.Bundled()
	if err != nil || dir == "" {
		return &gases{all: bundled}, err
	}
	own, _, err := run.OpenLibrary(dir)
	var list inputerr.List
	if err != nil && !errors.As(err, &list) {
		return nil, usagef("--library: got %q, want a folder of gases: %v", dir, err)
	}
	if err != nil {
		return nil, err
	}
	return &gases{all: own.Over(bundled), own: own, dir: dir}, nil
}

// find is the gas with the name, which may name a set.
func (g *gases) find(command, name string) (*crosssections.Gas, error) {
	gas, err := g.all.Gas(name)
	if err != nil {
		return nil, usagef("%s: %v", command, err)
	}
	return gas, nil
}

// from says where a gas comes from.
func (g *gases) from(name string) string {
	if g.own != nil && g.own.Has(name) {
		return g.dir
	}
	return "bundled"
}

// processes are all of them of a gas, of electrons first.
func processes(g *crosssections.Gas) []crosssections.Process {
	return slices.Concat(g.Electron, g.IonNeutral, g.Neutral)
}

// statusText counts the processes of each status: "2 computed, 3 read".
func statusText(list []crosssections.Process) string {
	counts := map[string]int{}
	for i := range list {
		counts[list[i].Source.Status]++
	}
	var parts []string
	for _, status := range slices.Sorted(maps.Keys(counts)) {
		parts = append(parts, fmt.Sprintf("%d %s", counts[status], status))
	}
	return strings.Join(parts, ", ")
}

// ionNames are the names of the declared ions.
func ionNames(g *crosssections.Gas) []string {
	list := []string{}
	for _, ion := range g.Ions {
		list = append(list, ion.Name)
	}
	return list
}
