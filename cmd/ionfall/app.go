package main

import (
	"errors"
	"fmt"
	"io"
	"runtime/debug"
	"strings"

	"github.com/urfave/cli/v2"
)

// commands are all of them, in the order of the help.
func (p *program) commands() []*cli.Command {
	return []*cli.Command{
		p.runCommand(),
		p.checkCommand(),
		p.resumeCommand(),
		p.scanCommand(),
		p.reportCommand(),
		p.plotCommand(),
		p.viewCommand(),
		p.gasCommand(),
		p.probeCommand(),
		p.schemaCommand(),
		p.versionCommand(),
	}
}

// execute carries out a command line and returns the exit status.
func (p *program) execute(args []string) (status int) {
	defer func() {
		if r := recover(); r != nil {
			p.complain(fmt.Errorf("this is a fault of the program: %v\n%s", r, debug.Stack()))
			status = exitFailed
		}
	}()
	p.asJSON = hasFlag(args, "json")
	app := p.app()
	args, err := arrange(app, args)
	if err == nil {
		err = app.Run(append([]string{app.Name}, args...))
	}
	if err != nil && !errors.Is(err, errVerdict) {
		p.complain(err)
	}
	return p.status(err)
}

func (p *program) app() *cli.App {
	app := &cli.App{
		Name:      "ionfall",
		Usage:     "which ions, how many and how fast, arrive at the substrate of an RF plasma",
		Writer:    p.stdout,
		ErrWriter: io.Discard, // errors are returned, and printed by complain
		// arrange turns "help COMMAND" into "COMMAND --help", and --version into the command.
		HideHelpCommand:       true,
		HideVersion:           true,
		CustomAppHelpTemplate: appHelp(),
		Commands:              p.commands(),
		ExitErrHandler:        func(*cli.Context, error) {}, // only main exits
		OnUsageError:          wrongUsage,
	}
	app.Action = func(*cli.Context) error {
		return usagef("no command given, want one of %s; for example: ionfall run argon.yaml",
			strings.Join(names(app.Commands), ", "))
	}
	for _, c := range app.Commands {
		furnish(c)
	}
	return app
}

// furnish gives a command and those below it what all have in common.
func furnish(c *cli.Command) {
	c.HideHelpCommand = true
	c.CustomHelpTemplate = commandHelp()
	c.OnUsageError = wrongUsage
	for _, below := range c.Subcommands {
		furnish(below)
	}
}

// wrongUsage is for what arrange lets through and the flag parser does not like.
func wrongUsage(_ *cli.Context, err error, _ bool) error { return usagef("%v", err) }

// names are those of the commands, without the hidden ones.
func names(commands []*cli.Command) []string {
	var list []string
	for _, c := range commands {
		if !c.Hidden {
			list = append(list, c.Name)
		}
	}
	return list
}
