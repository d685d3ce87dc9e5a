package main

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"time"

	"github.com/urfave/cli/v2"

	"ionfall/crosssections"
	"ionfall/internal/config"
	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
	"ionfall/internal/store"
)

func (p *program) gasImportCommand() *cli.Command {
	return &cli.Command{
		Name:  "import",
		Usage: "make a gas of your own from a file of electron cross sections",
		ArgsUsage: "FILE --as NAME [--species X] [--database D] [--ions-from He]\n" +
			"      [--ion X+=MASS_u] [--mass MASS_u] [--library DIR]",
		Description: `FILE is in the exchange form of the open-access repositories: blocks of a
keyword (ELASTIC, EFFECTIVE, EXCITATION, IONIZATION ...), target, threshold, and a table between
lines of dashes. The gas becomes the folder DIR/NAME, which must not exist. The tables are checked,
and keep their source, the hash of FILE and the day. An effective cross section is split on
loading. Such files have no collisions of ions: without --ions-from, swarms of electrons can be
followed, but no discharge can be run. Use the gas with
   gas: {library: ./gases, mixture: {NAME: 1}}`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "as", Usage: "the `NAME` that the gas gets"},
			&cli.StringFlag{Name: "species", Usage: "the species `X` of the file, if it has several"},
			&cli.StringFlag{
				Name: "database", Usage: "the database `D` of the file, if the species is in several",
			},
			&cli.StringFlag{
				Name:  "ions-from",
				Usage: "take ion collisions from the bundled `GAS`, an assumption for others",
			},
			&cli.StringSliceFlag{
				Name: "ion", Usage: "mass of an `ION` in u, as N2+=28.01",
			},
			&cli.StringFlag{
				Name: "mass", Usage: "mass `MASS_u` of the neutral in u (default: that of the file)",
			},
			libraryFlag("the folder `DIR` of your gases (default: gases)"),
		},
		Action: p.gasImport,
	}
}

// maxMassU is above that of any molecule of a discharge.
const maxMassU = 1e4

func (p *program) gasImport(c *cli.Context) error {
	v := values{c: c}
	set := crosssections.ImportSettings{
		Name:    v.text("as", "the name of the gas"),
		Species: v.text("species", "a species"), Database: v.text("database", "a database"),
		Mass: v.massU("mass", c.String("mass")) * phys.AtomicMass, IonMasses: v.ionMasses(),
		IonsFrom: v.ionsFrom(), Date: time.Now().Format(time.DateOnly),
	}
	if !config.GasName(set.Name) {
		v.fail("as", set.Name, "a name such as N2, of at most 32 letters, digits and ()+_-, with a "+
			"letter first")
	}
	dir := v.text("library", "a folder")
	if dir == "" {
		dir = "gases"
	}
	if err := v.bad.Err(); err != nil {
		return err
	}
	var err error
	if set.File, err = argument(c, "FILE of cross sections",
		"ionfall gas import nitrogen.txt --as N2"); err != nil {
		return err
	}
	target := filepath.Join(dir, set.Name)
	if _, err := os.Lstat(target); err == nil {
		return usagef("import: %s exists: choose another name or library, or move it away", target)
	}
	made, err := readImport(set)
	if err != nil {
		return err
	}
	if err := writeGas(dir, set.Name, made.Files); err != nil {
		return err
	}
	return p.print([]byte(importText(made, target, dir)))
}

func (v *values) massU(flag, text string) float64 {
	if text == "" {
		return 0
	}
	m, err := strconv.ParseFloat(text, 64)
	if err != nil || !(m > 0 && m <= maxMassU) {
		v.fail(flag, text, fmt.Sprintf("a mass in u, above 0 and at most %g", maxMassU))
		return 0
	}
	return m
}

func (v *values) ionMasses() map[string]float64 {
	masses := map[string]float64{}
	for _, text := range v.c.StringSlice("ion") {
		name, mass, found := strings.Cut(text, "=")
		if !found || name == "" || masses[name] != 0 {
			v.fail("ion", text, "an ion with its mass in u, such as N2+=28.01, each once")
			continue
		}
		masses[name] = v.massU("ion", mass) * phys.AtomicMass
	}
	return masses
}

// ionsFrom is the bundled gas whose ions are wanted, nil if none is.
func (v *values) ionsFrom() *crosssections.Gas {
	name := v.text("ions-from", "a bundled gas")
	if name == "" {
		return nil
	}
	bundled, err := crosssections.Bundled()
	if err == nil {
		var gas *crosssections.Gas
		if gas, err = bundled.Gas(name); err == nil {
			return gas
		}
	}
	v.bad = append(v.bad, &inputerr.Error{Key: "--ions-from", Hint: err.Error()})
	return nil
}

// readImport reads the file and makes the gas. What is wrong with the file has its place.
func readImport(set crosssections.ImportSettings) (*crosssections.NewGas, error) {
	info, err := os.Stat(set.File)
	if err == nil && !info.Mode().IsRegular() {
		return nil, usagef("import: got %s, want a regular file", set.File)
	}
	if errors.Is(err, fs.ErrNotExist) {
		return nil, usagef("import: %s: no such file", set.File)
	}
	if err != nil {
		return nil, err
	}
	f, err := os.Open(set.File)
	if err != nil {
		return nil, err
	}
	defer func() { _ = f.Close() }() // nothing was written
	sum := sha256.New()
	exchange, err := crosssections.ReadExchange(set.File, io.TeeReader(f, sum))
	if err != nil {
		return nil, err
	}
	set.SHA256 = hex.EncodeToString(sum.Sum(nil))
	made, err := exchange.NewGas(set)
	var list inputerr.List
	switch {
	case errors.As(err, &list):
		hintAtFlags(list)
		return nil, err
	case err != nil:
		return nil, usagef("import: %s: %v (see --species and --database)", set.File, err)
	}
	return made, nil
}

// hintAtFlags names the flag that gives what a file does not.
func hintAtFlags(list inputerr.List) {
	for _, e := range list {
		switch e.Key {
		case "mass_u":
			e.Hint = "give it with --mass MASS_u"
		case "ions.mass_u":
			e.Hint = "give it with --ion NAME=MASS_u"
		}
	}
}

// writeGas puts the files into a folder of the library in one step: there is the whole gas or none.
func writeGas(dir, name string, files crosssections.Files) (err error) {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	// Libraries pass over folders with a dot in front.
	temp, err := os.MkdirTemp(dir, "."+name+"-")
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, os.RemoveAll(temp)) }()
	if err := os.Chmod(temp, 0o755); err != nil { // not for the owner alone
		return err
	}
	for file, data := range files {
		if err := store.WriteFile(filepath.Join(temp, filepath.Base(file)), data); err != nil {
			return err
		}
	}
	return os.Rename(temp, filepath.Join(dir, name))
}

// importText says what came of an import, and what can be done with it.
func importText(made *crosssections.NewGas, target, dir string) string {
	var b strings.Builder
	g := made.Gas
	fmt.Fprintf(&b, "%s: %s, %d processes of electrons, %d of ions, ions: %s\n", target, g.Title,
		len(g.Electron), len(g.IonNeutral), strings.Join(ionNames(g), ", "))
	for _, w := range made.Warnings {
		b.WriteString("warning: " + w + "\n")
	}
	switch {
	case len(g.Ions) == 0:
		b.WriteString("No discharge can be run with this gas: it has no ionization. Swarms can be " +
			"followed.\n")
	case len(made.Missing) > 0:
		fmt.Fprintf(&b, "No discharge can be run with this gas yet: the collisions of %s with it are "+
			"not known\n(see --ions-from; or give its polarizability in gas.yaml, and they are estimated). "+
			"Swarms of electrons can be followed.\n",
			strings.Join(made.Missing, ", "))
	default:
		fmt.Fprintf(&b, "to run with it, in an input beside the folder %s:\n"+
			"   gas: {library: ./%s, mixture: {%s: 1}, ...}\n",
			filepath.Base(dir), filepath.ToSlash(filepath.Base(dir)), g.Name)
	}
	fmt.Fprintf(&b, "to look at it:\n   ionfall gas show %s --library %s\n", g.Name, dir)
	return b.String()
}
