package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// maxCores is far above any single machine.
const maxCores = 4096

func coresFlag() cli.Flag {
	return &cli.StringFlag{
		Name:  "cores",
		Usage: "use `N` processor cores (default: all); the results do not depend on it",
	}
}

// quantityFlag is a flag whose value may stand in several words: --field 10,20 Td.
type quantityFlag struct {
	*cli.StringFlag
	units []string
}

// withUnit adds to the value the words that belong to it: numbers after a comma, and the unit. It
// returns the words after them, too.
func (f *quantityFlag) withUnit(value string, rest []string) (string, []string) {
	for len(rest) > 0 && !looksLikeFlag(rest[0]) {
		if !strings.HasSuffix(value, ",") && !strings.HasPrefix(rest[0], ",") &&
			!f.isUnit(rest[0]) {
			break
		}
		value, rest = value+" "+rest[0], rest[1:]
	}
	return value, rest
}

func (f *quantityFlag) isUnit(word string) bool {
	return slices.ContainsFunc(f.units, func(u string) bool { return strings.EqualFold(u, word) })
}

func quietFlag() cli.Flag {
	return &cli.BoolFlag{Name: "quiet", Usage: "show no progress", DisableDefaultText: true}
}

func jsonFlag(usage string) cli.Flag {
	return &cli.BoolFlag{Name: "json", Usage: usage, DisableDefaultText: true}
}

// values reads the values of flags and collects what is wrong with them.
type values struct {
	c   *cli.Context
	bad inputerr.List
}

func (v *values) fail(flag, got, want string) {
	v.bad = append(v.bad, &inputerr.Error{Key: "--" + flag, Got: strconv.Quote(got), Want: want})
}

// integer is the whole number of a flag, 0 if it is not given.
func (v *values) integer(flag string, largest int) int {
	if !v.c.IsSet(flag) {
		return 0
	}
	n, err := strconv.Atoi(v.c.String(flag))
	if err != nil || n < 1 || n > largest {
		v.fail(flag, v.c.String(flag), fmt.Sprintf("a whole number from 1 to %d", largest))
		return 0
	}
	return n
}

// text is a value that must not be empty if it is given.
func (v *values) text(flag, want string) string {
	if v.c.IsSet(flag) && strings.TrimSpace(v.c.String(flag)) == "" {
		v.fail(flag, v.c.String(flag), want)
	}
	return v.c.String(flag)
}

// quantity reads a flag as the input file reads the same value: section is a mapping with %s in
// place of it. So units, limits and messages are those of the input.
func (v *values) quantity(flag, section string) *config.Case {
	rest := "gap: 40 mm\ndrive: {tones: [{frequency: 13.56 MHz, amplitude: 250 V}]}\n"
	if !strings.HasPrefix(section, "gas:") {
		rest += "gas: {pressure: 5 Pa, mixture: {Ar: 1}}\n"
	}
	if !v.c.IsSet(flag) {
		return nil
	}
	// JSON text is YAML text.
	quoted, err := json.Marshal(v.c.String(flag))
	if err != nil {
		v.fail(flag, v.c.String(flag), "readable text")
		return nil
	}
	c, err := config.Parse("", []byte(rest+fmt.Sprintf(section, quoted)+"\n"))
	if err == nil {
		return c
	}
	e := &inputerr.Error{Hint: err.Error()}
	errors.As(err, &e)
	v.bad = append(v.bad,
		&inputerr.Error{Key: "--" + flag, Got: e.Got, Want: e.Want, Hint: e.Hint})
	return nil
}

// argument is the one argument that a command takes; what and example say which.
func argument(c *cli.Context, what, example string) (string, error) {
	given := c.Args().Slice()
	switch {
	case len(given) == 0:
		return "", usagef("%s: no %s given; for example: %s", c.Command.Name, what, example)
	case len(given) > 1:
		return "", usagef("%s: got %d arguments (%s), want one, %s; for example: %s",
			c.Command.Name, len(given), quoteAll(given), what, example)
	case given[0] == "":
		return "", usagef("%s: got an empty name, want %s; for example: %s",
			c.Command.Name, what, example)
	}
	return given[0], nil
}

// noArgument refuses any.
func noArgument(c *cli.Context) error {
	if c.Args().Present() {
		return usagef("%s: got %s, want no arguments",
			c.Command.Name, quoteAll(c.Args().Slice()))
	}
	return nil
}

func quoteAll(words []string) string {
	var quoted []string
	for _, w := range words {
		quoted = append(quoted, strconv.Quote(w))
	}
	return strings.Join(quoted, ", ")
}
