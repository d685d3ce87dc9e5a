package main

import (
	"fmt"
	"runtime"
	"runtime/debug"

	"github.com/urfave/cli/v2"

	"ionfall/internal/run"
)

// version and commit are set by the linker: -ldflags "-X main.version=1.2.3 -X main.commit=abc".
var version, commit string

// build says what this program is.
type build struct {
	Version  string `json:"version"`
	Commit   string `json:"commit"`
	Go       string `json:"go"`
	Platform string `json:"platform"`
	Kernels  string `json:"kernels"`
}

func thisBuild() build {
	b := build{
		Version: version, Commit: commit, Go: runtime.Version(),
		Platform: runtime.GOOS + "/" + runtime.GOARCH,
	}
	if info, ok := debug.ReadBuildInfo(); ok {
		if b.Version == "" && info.Main.Version != "(devel)" {
			b.Version = info.Main.Version
		}
		for _, s := range info.Settings {
			if s.Key == "vcs.revision" && b.Commit == "" {
				b.Commit = s.Value
			}
		}
	}
	if b.Version == "" {
		b.Version = "unknown"
	}
	if b.Commit == "" {
		b.Commit = "unknown"
	}
	return b
}

// versionText is what results say about the program that made them.
func versionText() string {
	b := thisBuild()
	return fmt.Sprintf("%s (commit %s)", b.Version, b.Commit)
}

func (p *program) versionCommand() *cli.Command {
	return &cli.Command{
		Name:      "version",
		Usage:     "tell which program this is",
		ArgsUsage: "[--json]",
		Flags:     []cli.Flag{jsonFlag("print it as JSON")},
		Action: func(c *cli.Context) error {
			if err := noArgument(c); err != nil {
				return err
			}
			b := thisBuild()
			set, err := run.Kernels()
			if err != nil {
				return usagef("%v", err)
			}
			b.Kernels = set.Name
			if p.asJSON {
				text, err := encodeJSON(b, true)
				if err != nil {
					return err
				}
				return p.print(text)
			}
			return p.print([]byte(fmt.Sprintf("ionfall %s (commit %s), %s, %s, kernels %s\n",
				b.Version, b.Commit, b.Go, b.Platform, b.Kernels)))
		},
	}
}
