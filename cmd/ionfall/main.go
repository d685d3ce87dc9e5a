// Command ionfall simulates capacitive RF plasmas and tells which ions arrive at the substrate.
//
// It only parses the command line, calls the packages that do the work, and prints. Results go to
// files and stdout, progress and logs to stderr. exit.go lists the exit statuses.
//
// To add a command: write it in a file cmd_NAME.go as a method of program, and add its line to
// commands in app.go.
package main

import (
	"io"
	"os"

	"golang.org/x/term"
)

func main() {
	ignoreBrokenPipes()
	p := newProgram(os.Stdout, os.Stderr)
	if fd := int(os.Stderr.Fd()); term.IsTerminal(fd) {
		p.width = func() int {
			width, _, err := term.GetSize(fd)
			if err != nil {
				return 0 // unknown
			}
			return width
		}
	}
	done := make(chan int, 1)
	go func() { done <- p.execute(os.Args[1:]) }()
	select {
	case status := <-done:
		os.Exit(status)
	case status := <-p.killed:
		os.Exit(status)
	}
}

// program is one call of the command.
type program struct {
	stdout, stderr io.Writer
	// width gives the columns of the terminal that stderr is; nil if it is none.
	width func() int
	// killed receives the exit status when the user does not want to wait for the end.
	killed chan int
	// signal is the first one that asked for the end, as an exit status; 0 is none.
	signal int
	// asJSON asks for JSON in place of text.
	asJSON bool
}

func newProgram(stdout, stderr io.Writer) *program {
	return &program{stdout: stdout, stderr: stderr, killed: make(chan int, 1)}
}
