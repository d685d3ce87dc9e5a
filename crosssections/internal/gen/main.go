// Command gen writes the bundled tables that follow from published formulas or from other
// tables. Run it through `go generate ./crosssections`; a test compares the files with it.
package main

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
)

func main() {
	dir := flag.String("dir", "data", "folder of the library")
	flag.Parse()
	if err := write(*dir); err != nil {
		fmt.Fprintln(os.Stderr, "gen:", err)
		os.Exit(1)
	}
}

func write(dir string) error {
	files, err := tables(os.DirFS(dir))
	if err != nil {
		return err
	}
	for _, f := range files {
		name := filepath.Join(dir, filepath.FromSlash(f.name))
		if err := os.WriteFile(name, f.bytes(), 0o644); err != nil {
			return err
		}
	}
	return nil
}
