// Command speed measures the program on this machine and writes bench/SPEED.md:
//
//	go run ./bench/speed [-runs 5] [-answers] [-write]
//
// Whole-loop figures are medians over runs; things that are compared are run in turn.
package main

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"runtime"
	"time"
)

func main() {
	runs := flag.Int("runs", 5, "runs of each whole loop")
	write := flag.Bool("write", false, "write bench/SPEED.md instead of printing")
	answers := flag.Bool("answers", false, "only make the table of bench/fastpath.json anew")
	peak := flag.Bool("peak", false, "run a million particles and print the peak memory")
	flag.Parse()
	var text []byte
	var err error
	switch {
	case *peak:
		text, err = peakMemory()
	case *answers:
		text, err = withAnswers()
	default:
		text, err = report(*runs)
	}
	if err == nil && *write {
		err = os.WriteFile("bench/SPEED.md", text, 0o644)
	} else if err == nil {
		_, err = os.Stdout.Write(text)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "speed:", err)
		os.Exit(1)
	}
}

func report(runs int) ([]byte, error) {
	var b bytes.Buffer
	fmt.Fprintf(&b, "# Speed\n\nWritten by `go run ./bench/speed -write` on %s: %s, %s/%s, "+
		"%d processors.\n\n", time.Now().UTC().Format(time.DateOnly),
		cpuName(), runtime.GOOS, runtime.GOARCH, runtime.NumCPU())
	if err := loops(&b, runs); err != nil {
		return nil, err
	}
	if err := fastPath(&b); err != nil {
		return nil, err
	}
	if err := memory(&b); err != nil {
		return nil, err
	}
	err := pieces(&b)
	return b.Bytes(), err
}
