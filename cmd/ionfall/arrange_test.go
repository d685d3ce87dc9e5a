package main

import (
	"io"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/urfave/cli/v2"
)

// testApp has commands of every shape: below another, with a switch, values, and a list.
func testApp() *cli.App {
	return &cli.App{Name: "ionfall", Commands: []*cli.Command{
		{Name: "run", Flags: []cli.Flag{
			&cli.StringFlag{Name: "out", Aliases: []string{"o"}},
			&cli.StringFlag{Name: "bias"},
			&cli.BoolFlag{Name: "quiet"},
			&cli.StringSliceFlag{Name: "set"},
		}},
		{Name: "gas", Subcommands: []*cli.Command{{Name: "list"}, {Name: "show"}, {
			Name: "swarm", Flags: []cli.Flag{
				&quantityFlag{&cli.StringFlag{Name: "field"}, []string{"Td"}},
				&cli.BoolFlag{Name: "json"},
			},
		}}},
		{Name: "version"},
	}}
}

// Goal: flags are found wherever they stand, and nothing is taken for what it is not.
// Method: command lines and the order wanted, written by hand.
func TestArrange(t *testing.T) {
	for _, c := range []struct{ args, want string }{
		{"", ""},
		{"run", "run --"},
		{"run a.yaml", "run -- a.yaml"},
		{"run a.yaml --quiet", "run --quiet=true -- a.yaml"},
		{"run --quiet a.yaml", "run --quiet=true -- a.yaml"},
		{"run a.yaml --out d --quiet", "run --out=d --quiet=true -- a.yaml"},
		{"run --out d a.yaml", "run --out=d -- a.yaml"},
		{"run -out d a.yaml", "run --out=d -- a.yaml"},
		{"run a.yaml -o d", "run --out=d -- a.yaml"},
		{"run --out=d=e a.yaml", "run --out=d=e -- a.yaml"},
		{"run --out=--quiet a.yaml", "run --out=--quiet -- a.yaml"},
		{"run a.yaml --quiet=false", "run --quiet=false -- a.yaml"},
		{"run a.yaml --bias -5", "run --bias=-5 -- a.yaml"},
		{"run a.yaml --bias -.5e3", "run --bias=-.5e3 -- a.yaml"},
		{"run -5 a.yaml", "run -- -5 a.yaml"},
		{"run - --quiet", "run --quiet=true -- -"},
		{"run -- --quiet", "run -- --quiet"},
		{"run --quiet -- -a.yaml --out", "run --quiet=true -- -a.yaml --out"},
		{"run -- -- a", "run -- -- a"},
		{"run --set a --set b x", "run --set=a --set=b -- x"},
		{"run a.yaml --help", "run --help"},
		{"run --wrong -h", "run --help"},
		{"run -- --help", "run -- --help"},
		{"help", "--help"},
		{"--help", "--help"},
		{"help run", "run --help"},
		{"help gas list", "gas list --help"},
		{"gas list x", "gas list -- x"},
		{"gas", "gas --"},
		{"--version", "version --"},
	} {
		got, err := arrange(testApp(), strings.Fields(c.args))
		if err != nil || !slices.Equal(got, strings.Fields(c.want)) {
			t.Errorf("%q: got %q, %v, want %q", c.args, got, err, c.want)
		}
	}
}

// Goal: every mistake is told, with the nearest known word. Method: whole messages.
func TestArrangeErrors(t *testing.T) {
	for args, want := range map[string]string{
		"rum a.yaml":    `unknown command "rum"; did you mean "run"?`,
		"simulate":      `unknown command "simulate"; want one of run, gas, version`,
		"a.yaml":        `unknown command "a.yaml"; want one of run, gas, version`,
		"gas lits":      `unknown command "gas lits"; did you mean "gas list"?`,
		"help rum":      `unknown command "rum"; did you mean "run"?`,
		"run --quite a": "run: unknown flag --quite; did you mean --quiet?; see: ionfall run --help",
		"run --xyz=3 a": "run: unknown flag --xyz; see: ionfall run --help",
		"run --out":     "run: flag --out has no value; see: ionfall run --help",
		"run a --out --quiet": "run: flag --out has no value; " +
			"see: ionfall run --help",
		"run a --out b -o c": "run: flag --out is given twice; see: ionfall run --help",
		"run a --quiet=maybe": `run: flag --quiet: got "maybe", want no value, or true or false; ` +
			"see: ionfall run --help",
		"run --a1 --quite": "run: unknown flag --a1; unknown flag --quite; did you mean --quiet?; " +
			"see: ionfall run --help",
		"--quiet run a": "flag --quiet before the command: flags stand after it, as in: " +
			"ionfall run argon.yaml --quiet",
	} {
		_, err := arrange(testApp(), strings.Fields(args))
		if err == nil || err.Error() != want {
			t.Errorf("%q: got %v, want %s", args, err, want)
		}
	}
}

// Goal: the flag parser reads what arrange gives it as it was meant. Method: a command that tells
// what it got.
func TestArrangeForParser(t *testing.T) {
	for args, want := range map[string]string{
		"run a.yaml --out d --quiet": "out=d quiet=true args=a.yaml",
		"run -- --quiet help":        "out= quiet=false args=--quiet,help",
		"run help":                   "out= quiet=false args=help",
		"run -3 --out=-4":            "out=-4 quiet=false args=-3",
	} {
		app, got := testApp(), ""
		furnish(app.Commands[0])
		app.Writer = io.Discard
		app.Commands[0].Action = func(c *cli.Context) error {
			got = "out=" + c.String("out") + " quiet=" + strconv.FormatBool(c.Bool("quiet")) +
				" args=" + strings.Join(c.Args().Slice(), ",")
			return nil
		}
		words, err := arrange(app, strings.Fields(args))
		if err == nil {
			err = app.Run(append([]string{"ionfall"}, words...))
		}
		if err != nil || got != want {
			t.Errorf("%q: got %q, %v, want %q", args, got, err, want)
		}
	}
}

// Goal: --json counts also where the command line is wrong. Method: both ways of writing it.
func TestHasFlag(t *testing.T) {
	for args, want := range map[string]bool{
		"run --json": true, "run a -json": true, "run --json=true": true,
		"run a": false, "run -- --json": false, "run --json=false": false, "run --jsonx": false,
	} {
		if got := hasFlag(strings.Fields(args), "json"); got != want {
			t.Errorf("%q: got %t, want %t", args, got, want)
		}
	}
}

// Goal: a value with its unit may stand in several words, and takes no other word with it.
// Method: command lines and what the flag gets, by hand.
func TestArrangeQuantities(t *testing.T) {
	for args, want := range map[string][]string{
		"gas swarm --field 10,20 Td Ar":        {"--field=10,20 Td", "--", "Ar"},
		"gas swarm Ar --field 10,20Td":         {"--field=10,20Td", "--", "Ar"},
		"gas swarm --field 10, 20 , 30 Td Ar":  {"--field=10, 20 , 30 Td", "--", "Ar"},
		"gas swarm --field=10,20 Td --json Ar": {"--field=10,20 Td", "--json=true", "--", "Ar"},
		"gas swarm --field 10,20 Ar":           {"--field=10,20", "--", "Ar"},
		"gas swarm --field 10, --json Ar":      {"--field=10,", "--json=true", "--", "Ar"},
	} {
		got, err := arrange(testApp(), strings.Fields(args))
		want = append([]string{"gas", "swarm"}, want...)
		if err != nil || !slices.Equal(got, want) {
			t.Errorf("%q: got %q, %v, want %q", args, got, err, want)
		}
	}
}
