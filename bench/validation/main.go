// Command validation renders the rows of testdata/validation as a page:
//
//	go run ./bench/validation [-write]
//
// It is run in the folder of go.mod. The page goes to stdout, with -write to bench/VALIDATION.md.
// The rows come from tests; the page says which, and how to repeat them.
package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
)

const (
	rowsFolder = "testdata/validation"
	page       = "bench/VALIDATION.md"
)

const (
	exitFailed = 1
	exitUsage  = 2
)

// errUsage marks what is wrong with the command line.
var errUsage = errors.New("usage")

func main() {
	err := run(os.Args[1:], ".", os.Stdout, os.Stderr)
	switch {
	case err == nil || errors.Is(err, flag.ErrHelp):
	case errors.Is(err, errUsage):
		fmt.Fprintln(os.Stderr, "validation:", err)
		os.Exit(exitUsage)
	default:
		fmt.Fprintln(os.Stderr, "validation:", err)
		os.Exit(exitFailed)
	}
}

// run does what the command line says in the module at root.
func run(args []string, root string, out, help io.Writer) error {
	f := flag.NewFlagSet("validation", flag.ContinueOnError)
	f.SetOutput(help)
	write := f.Bool("write", false, "write "+page+" instead of printing")
	if err := f.Parse(args); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			return err
		}
		return fmt.Errorf("%w: %w", errUsage, err)
	}
	if f.NArg() > 0 {
		return fmt.Errorf("%w: got the argument %q, want flags only", errUsage, f.Arg(0))
	}
	list, err := readParts(filepath.Join(root, rowsFolder))
	if err != nil {
		return err
	}
	text := render(list)
	if !*write {
		_, err := out.Write(text)
		return err
	}
	return os.WriteFile(filepath.Join(root, page), text, 0o644)
}
