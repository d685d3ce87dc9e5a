package main

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/inputerr"
)

// arrange puts a command line into the order that the flag parser needs: commands, flags, "--",
// arguments. The parser stops at the first argument and would take later flags for arguments,
// without a word. Unknown commands and flags are found here, to name the nearest known.
func arrange(app *cli.App, args []string) ([]string, error) {
	if len(args) == 0 {
		return nil, nil
	}
	switch args[0] {
	case "help", "-h", "--help", "-help":
		topic := args[1:]
		if len(topic) == 0 {
			return []string{"--help"}, nil
		}
		return arrange(app, append(slices.Clone(topic), "--help"))
	case "--version", "-version":
		return arrange(app, append([]string{"version"}, args[1:]...))
	}
	path, command := []string{}, (*cli.Command)(nil)
	known := app.Commands
	for len(known) > 0 && len(args) > 0 {
		if looksLikeFlag(args[0]) {
			break
		}
		next := find(known, args[0])
		if next == nil {
			return nil, unknownCommand(path, args[0], known)
		}
		path, args, command = append(path, next.Name), args[1:], next
		known = next.Subcommands
	}
	if command == nil {
		return nil, usagef("flag %s before the command: flags stand after it, as in: "+
			"ionfall run argon.yaml --quiet", args[0])
	}
	rest, err := sortFlags(strings.Join(path, " "), command.Flags, args)
	if err != nil {
		return nil, err
	}
	return append(path, rest...), nil
}

func find(commands []*cli.Command, name string) *cli.Command {
	for _, c := range commands {
		if c.HasName(name) {
			return c
		}
	}
	return nil
}

func unknownCommand(path []string, name string, known []*cli.Command) error {
	text := fmt.Sprintf("unknown command %q", strings.Join(append(path, name), " "))
	if near := inputerr.Nearest(name, names(known)); near != "" {
		return usagef("%s; did you mean %q?", text, strings.Join(append(path, near), " "))
	}
	return usagef("%s; want one of %s", text, strings.Join(names(known), ", "))
}

// sorter takes the words of a command line apart.
type sorter struct {
	command      string
	flags        []cli.Flag
	options      []string // flags with their values
	arguments    []string
	seen         map[string]bool
	wrong        []string
	wantsHelp    bool
	onlyArgument bool // after --
}

// sortFlags returns flags, "--" and arguments. All errors are told at once.
func sortFlags(command string, flags []cli.Flag, args []string) ([]string, error) {
	s := &sorter{command: command, flags: flags, seen: map[string]bool{}}
	for len(args) > 0 {
		args = s.take(args)
	}
	switch {
	case s.wantsHelp:
		return []string{"--help"}, nil
	case len(s.wrong) > 0:
		return nil, usagef("%s: %s; see: ionfall %s --help",
			command, strings.Join(s.wrong, "; "), command)
	}
	return append(append(s.options, "--"), s.arguments...), nil
}

// take takes the first word, and the second where it is the value of a flag.
func (s *sorter) take(args []string) []string {
	word, rest := args[0], args[1:]
	switch {
	case s.onlyArgument, !looksLikeFlag(word):
		s.arguments = append(s.arguments, word)
		return rest
	case word == "--":
		s.onlyArgument = true
		return rest
	}
	name, value, hasValue := strings.Cut(strings.TrimLeft(word, "-"), "=")
	if name == "help" || name == "h" {
		s.wantsHelp = true
		return rest
	}
	flag := s.find(name)
	if flag == nil {
		s.unknown(word)
		return rest
	}
	first := flag.Names()[0]
	if _, many := flag.(*cli.StringSliceFlag); s.seen[first] && !many {
		s.wrong = append(s.wrong, fmt.Sprintf("flag --%s is given twice", first))
	}
	s.seen[first] = true
	if _, isSwitch := flag.(*cli.BoolFlag); isSwitch {
		s.takeSwitch(first, value, hasValue)
		return rest
	}
	if !hasValue {
		if len(rest) == 0 || looksLikeFlag(rest[0]) {
			s.wrong = append(s.wrong, fmt.Sprintf("flag --%s has no value", first))
			return rest
		}
		value, rest = rest[0], rest[1:]
	}
	if q, ok := flag.(*quantityFlag); ok {
		value, rest = q.withUnit(value, rest)
	}
	s.options = append(s.options, "--"+first+"="+value)
	return rest
}

func (s *sorter) takeSwitch(name, value string, hasValue bool) {
	on := true
	if hasValue {
		var err error
		if on, err = strconv.ParseBool(value); err != nil {
			s.wrong = append(s.wrong,
				fmt.Sprintf("flag --%s: got %q, want no value, or true or false", name, value))
			return
		}
	}
	s.options = append(s.options, fmt.Sprintf("--%s=%t", name, on))
}

func (s *sorter) find(name string) cli.Flag {
	for _, f := range s.flags {
		if slices.Contains(f.Names(), name) {
			return f
		}
	}
	return nil
}

func (s *sorter) unknown(word string) {
	shown, _, _ := strings.Cut(word, "=")
	var known []string
	for _, f := range s.flags {
		known = append(known, "--"+f.Names()[0])
	}
	known = append(known, "--help")
	text := "unknown flag " + shown
	if near := inputerr.Nearest("--"+strings.TrimLeft(shown, "-"), known); near != "" {
		text += fmt.Sprintf("; did you mean %s?", near)
	}
	s.wrong = append(s.wrong, text)
}

// looksLikeFlag tells a flag from an argument. A negative number is none, nor is a single "-".
func looksLikeFlag(word string) bool {
	if len(word) < 2 || word[0] != '-' {
		return false
	}
	return word[1] != '.' && (word[1] < '0' || word[1] > '9')
}

// hasFlag tells whether a switch is on, before the command line has been understood.
func hasFlag(args []string, name string) bool {
	for _, word := range args {
		if word == "--" {
			return false
		}
		if word == "--"+name || word == "-"+name || word == "--"+name+"=true" {
			return true
		}
	}
	return false
}
