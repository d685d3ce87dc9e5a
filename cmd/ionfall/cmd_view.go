package main

import (
	"errors"
	"fmt"
	"io/fs"

	"github.com/urfave/cli/v2"

	"ionfall/internal/web"
)

func (p *program) viewCommand() *cli.Command {
	return &cli.Command{
		Name:      "view",
		Usage:     "show results in a browser on this machine, and follow what runs",
		ArgsUsage: "DIR [--port N] [--allow-runs]",
		Description: `DIR is a run, a scan, or a folder of them; also what is still running. The
viewer answers on 127.0.0.1 only, at the address it prints, which opens one window: nothing leaves
the machine and no other user or page can look in. Ctrl-C ends it; what runs goes on.
With --allow-runs the page can also start runs in DIR, with the same checks as the command line.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "port", Usage: "listen on port `N` (default: a free one)"},
			&cli.BoolFlag{
				Name: "allow-runs", DisableDefaultText: true,
				Usage: "let the page start simulations",
			},
		},
		Action: p.view,
	}
}

// maxPort is the largest there is.
const maxPort = 65535

func (p *program) view(c *cli.Context) error {
	v := values{c: c}
	options := web.Options{Port: v.integer("port", maxPort), Version: versionText()}
	if err := v.bad.Err(); err != nil {
		return err
	}
	dir, err := argument(c, "folder DIR", "ionfall view results")
	if err != nil {
		return err
	}
	if c.Bool("allow-runs") {
		if options.Launcher, err = newLauncher(dir); err != nil {
			return err
		}
	}
	server, err := web.New(dir, options)
	if errors.Is(err, fs.ErrNotExist) || errors.Is(err, web.ErrNotFolder) ||
		errors.Is(err, web.ErrOneResult) {
		return usagef("view: %v", err)
	}
	if err != nil {
		return err
	}
	address, err := server.Address()
	if err != nil {
		return err
	}
	text := fmt.Appendf(nil, "open this address in a browser, once:\n%s\n", address)
	if err := p.print(text); err != nil {
		return err
	}
	ctx, stop := p.interruptible(p.stderr)
	err = server.Serve(ctx)
	stop()
	if ctx.Err() != nil {
		p.signal = 0 // to end it is what the signal is for
	}
	return err
}
