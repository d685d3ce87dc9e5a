package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/crosssections"
	"ionfall/internal/inputerr"
	"ionfall/internal/probe"
)

func (p *program) probeCommand() *cli.Command {
	c := &cli.Command{
		Name:      "probe",
		Usage:     "reduce measurements of a Langmuir probe or an ion analyser, compare and adjust",
		ArgsUsage: "COMMAND",
		Description: `Measurements come as text files with a header such as voltage_V,current_A. Every
number has its standard error, and what the data cannot tell is not stated.`,
		Subcommands: []*cli.Command{
			p.probeReadCommand(), p.probeCompareCommand(), p.probeAnalyserCommand(),
			p.probeAdjustCommand(), p.probeDrawCommand(),
		},
	}
	c.Action = func(*cli.Context) error {
		return usagef("probe: no command given, want one of %s; for example: ionfall probe read "+
			"sweeps.csv --tip-radius 50 um --tip-length 8 mm --gas Ar",
			strings.Join(names(c.Subcommands), ", "))
	}
	return c
}

// readFile reads a file of measurements or a description.
func readFile(path string) ([]byte, error) {
	info, err := os.Stat(path)
	bad := &inputerr.Error{File: path}
	switch {
	case errors.Is(err, fs.ErrNotExist):
		bad.Hint = "no such file"
	case err != nil:
		bad.Hint = "cannot be read: " + err.Error()
	case !info.Mode().IsRegular():
		bad.Got, bad.Want = "a folder or device", "a regular file"
	case info.Size() > probe.MaxFileBytes:
		bad.Got = fmt.Sprintf("%d bytes", info.Size())
		bad.Want = fmt.Sprintf("at most %d", probe.MaxFileBytes)
	default:
		src, err := os.ReadFile(path)
		if err == nil {
			return src, nil
		}
		bad.Hint = "cannot be read: " + err.Error()
	}
	return nil, inputerr.List{bad}
}

// readDescription reads a file that describes measurements.
func readDescription(path string) (*probe.Description, error) {
	src, err := readFile(path)
	if err != nil {
		return nil, err
	}
	return probe.ParseDescription(path, src)
}

// beside is a file that another one names, relative to its folder.
func beside(file, name string) string {
	if filepath.IsAbs(name) {
		return name
	}
	return filepath.Join(filepath.Dir(file), name)
}

// probeElectronEV and probeIonEV are where the mean free paths of electrons and of the ions in the
// sheath of the probe are looked up [eV].
const (
	probeElectronEV = 4.0
	probeIonEV      = 2.0
)

// fillGas looks up what a setup needs to know about its gas. where makes an error about the gas.
func (g *gases) fillGas(s *probe.Setup, where func(hint string) error) error {
	gas, err := g.all.Gas(s.Gas)
	if err != nil {
		return where(err.Error())
	}
	for _, ion := range gas.Ions {
		if ion.Charge == 1 {
			s.IonMass = ion.Mass
			s.IonCrossSection = totalCrossSection(gas.IonNeutral, ion.Name, probeIonEV)
			break
		}
	}
	if s.IonMass == 0 {
		// An electron's mass makes no difference that anybody could measure.
		s.IonMass = gas.Mass
	}
	s.ElectronCrossSection = totalCrossSection(gas.Electron, crosssections.ElectronName,
		probeElectronEV)
	return nil
}

// totalCrossSection of a particle with its gas [m2].
func totalCrossSection(list []crosssections.Process, projectile string, energyEV float64) float64 {
	sum := 0.0
	for i := range list {
		if list[i].Projectile == projectile {
			sum += list[i].Table.At(energyEV)
		}
	}
	return sum
}
