package main

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

func (p *program) gasShowCommand() *cli.Command {
	return &cli.Command{
		Name:      "show",
		Usage:     "show the processes of a gas: what they are, how far they reach, their sources",
		ArgsUsage: "GAS[/SET] [--library DIR] [--plot FILE.svg] [--json]",
		Description: `Rows are the energies of the table's rows; the source covers them up to the
energy under "valid to". Above, results are extrapolated, and a run says how much they are.`,
		Flags: []cli.Flag{
			libraryFlag(alsoLibrary),
			&cli.StringFlag{
				Name:  "plot",
				Usage: "draw the cross sections into the file `FILE.svg`, which is replaced",
			},
			jsonFlag("print it as JSON"),
		},
		Action: p.gasShow,
	}
}

// shownGas is what there is to know about a set of a gas.
type shownGas struct {
	Name      string         `json:"name"`
	Set       string         `json:"set"`
	Title     string         `json:"title"`
	Note      string         `json:"note"`
	From      string         `json:"from"`
	MassU     float64        `json:"mass_u"`
	Sets      []string       `json:"sets"`
	Ions      []shownIon     `json:"ions"`
	SHA256    string         `json:"sha256"`
	Warnings  []string       `json:"warnings"`
	Numbers   []shownNumber  `json:"numbers"`
	Processes []shownProcess `json:"processes"`
}

type shownIon struct {
	Name   string  `json:"name"`
	Charge int     `json:"charge"`
	MassU  float64 `json:"mass_u"`
}

// shownNumber is a number of the gas that is no cross section.
type shownNumber struct {
	Name   string  `json:"name"`
	Value  float64 `json:"value"`
	Unit   string  `json:"unit"`
	Source string  `json:"source"`
	Status string  `json:"status"`
	Note   string  `json:"note"`
}

type shownProcess struct {
	Name       string   `json:"name"`
	Projectile string   `json:"projectile"`
	Target     string   `json:"target"`
	Kind       string   `json:"kind"`
	Threshold  float64  `json:"threshold_eV"`
	Products   []string `json:"products"`
	Release    float64  `json:"release_eV"`
	From       float64  `json:"rows_from_eV"`
	To         float64  `json:"rows_to_eV"`
	ValidTo    float64  `json:"valid_to_eV"`
	Rows       int      `json:"rows"`
	Frame      string   `json:"frame"`
	Source     string   `json:"source"`
	Database   string   `json:"database"`
	Date       string   `json:"date"`
	Status     string   `json:"status"`
	Note       string   `json:"note"`
	File       string   `json:"file"`
	SHA256     string   `json:"sha256"`
}

func (p *program) gasShow(c *cli.Context) error {
	v := values{c: c}
	plot := v.text("plot", "a file such as argon.svg")
	if plot != "" && !strings.HasSuffix(strings.ToLower(plot), ".svg") {
		v.fail("plot", plot, "a file such as argon.svg")
	}
	library, err := v.gases()
	if err != nil {
		return err
	}
	name, err := argument(c, "name of a GAS", "ionfall gas show Ar")
	if err != nil {
		return err
	}
	g, err := library.find("show", name)
	if err != nil {
		return err
	}
	if plot != "" {
		picture, err := drawGas(g)
		if err != nil {
			return err
		}
		if err := store.WriteFile(plot, picture); err != nil {
			return err
		}
	}
	shown := describeGas(g, library.from(g.Name))
	if !p.asJSON {
		return p.print([]byte(shown.text()))
	}
	text, err := encodeJSON(shown, true)
	if err != nil {
		return err
	}
	return p.print(text)
}

func describeGas(g *crosssections.Gas, from string) *shownGas {
	s := &shownGas{
		Name: g.Name, Set: g.Set, Title: g.Title, Note: g.Note, From: from,
		MassU: g.Mass / phys.AtomicMass, Sets: g.Sets, SHA256: g.SHA256,
		Ions: []shownIon{}, Warnings: append([]string{}, g.Warnings...),
	}
	for _, ion := range g.Ions {
		s.Ions = append(s.Ions, shownIon{ion.Name, ion.Charge, ion.Mass / phys.AtomicMass})
	}
	for _, q := range processes(g) {
		t := &q.Table
		s.Processes = append(s.Processes, shownProcess{
			Name: q.Name, Projectile: q.Projectile, Target: cmp.Or(q.Target, g.Name),
			Release: q.Release, Kind: q.Kind.String(), Threshold: q.Threshold,
			Products: append([]string{}, q.Products...), From: t.Energy[0], To: t.Max(),
			ValidTo: t.Limit(), Rows: len(t.Energy), Frame: q.Frame.String(),
			Source: q.Source.Citation, Database: q.Source.Database, Date: q.Source.Date,
			Status: q.Source.Status, Note: q.Source.Note, File: q.File, SHA256: q.SHA256,
		})
	}
	for _, q := range g.Pairs {
		t := &q.Table
		s.Processes = append(s.Processes, shownProcess{
			Name: q.Name, Projectile: q.Reactants[0], Target: q.Reactants[1],
			Kind: q.Kind.String(), Threshold: q.Threshold,
			Products: q.Products, From: t.Energy[0], To: t.Max(), ValidTo: t.Limit(),
			Rows: len(t.Energy), Frame: crosssections.CenterOfMass.String(),
			Source: q.Source.Citation, Database: q.Source.Database, Date: q.Source.Date,
			Status: q.Source.Status, Note: q.Source.Note, File: q.File, SHA256: q.SHA256,
		})
	}
	s.numbers(g)
	return s
}

// numbers adds what is known of the molecule and its ions besides cross sections.
func (s *shownGas) numbers(g *crosssections.Gas) {
	s.Numbers = []shownNumber{}
	add := func(name, unit string, d crosssections.Datum) {
		if d.Value != 0 {
			s.Numbers = append(s.Numbers, shownNumber{
				name, d.Value, unit, d.Source.Citation, d.Source.Status, d.Source.Note,
			})
		}
	}
	add("polarizability", "A^3", g.Polarizability)
	add("diameter", "A", g.Diameter)
	add("width of energy sharing", "eV", g.Sharing)
	for _, ion := range g.Ions {
		add("electron affinity of "+strings.TrimRight(ion.Name, "-"), "eV", ion.Affinity)
	}
}

// hashDigits of a hash tell tables apart on a screen; JSON has all.
const hashDigits = 12

func (s *shownGas) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s: %s, set %s of %s; %s\n", s.Name, s.Title, s.Set,
		strings.Join(s.Sets, ", "), s.From)
	fmt.Fprintf(&b, "mass %s u", progress.Digits(s.MassU, 7))
	for _, ion := range s.Ions {
		fmt.Fprintf(&b, "; %s: charge %d, mass %s u", ion.Name, ion.Charge,
			progress.Digits(ion.MassU, 7))
	}
	fmt.Fprintf(&b, "\nSHA-256 %s\n", s.SHA256)
	if s.Note != "" {
		b.WriteString(wrap(s.Note))
	}
	for _, w := range s.Warnings {
		b.WriteString(wrap("warning: " + w))
	}
	b.WriteString("\n")
	rows := [][]string{{
		"process", "of", "with", "kind", "threshold", "rows [eV]", "valid to", "frame", "status",
		"source",
		"SHA-256",
	}}
	var sources []string
	for _, q := range s.Processes {
		threshold := "none"
		if q.Threshold > 0 {
			threshold = fmt.Sprintf("%g eV", q.Threshold)
		}
		rows = append(rows, []string{
			q.Name, q.Projectile, q.Target, q.Kind, threshold,
			fmt.Sprintf("%g to %g", q.From, q.To),
			fmt.Sprintf("%g eV", q.ValidTo), strings.ReplaceAll(q.Frame, "_", " "), q.Status,
			sourceNumber(&sources, q.reference()), q.SHA256[:min(hashDigits, len(q.SHA256))],
		})
	}
	b.WriteString(align(rows) + "\n")
	numbers := [][]string{}
	for _, n := range s.Numbers {
		numbers = append(numbers, []string{
			n.Name, fmt.Sprintf("%g %s", n.Value, n.Unit), n.Status,
			sourceNumber(&sources, n.Source),
		})
	}
	if len(numbers) > 0 {
		b.WriteString(align(numbers) + "\n")
	}
	for i, text := range sources {
		b.WriteString(wrap(fmt.Sprintf("[%d] %s", i+1, text)))
	}
	return b.String()
}

// reference is the source with its database and date.
func (q *shownProcess) reference() string {
	text := q.Source
	if q.Database != "" {
		text += "; database " + q.Database
	}
	if q.Date != "" {
		text += ", " + q.Date
	}
	return text
}

// sourceNumber is the number of the source in the list, which it joins if it is new.
func sourceNumber(list *[]string, text string) string {
	i := slices.Index(*list, text)
	if i < 0 {
		i = len(*list)
		*list = append(*list, text)
	}
	return fmt.Sprintf("[%d]", i+1)
}

// wrap breaks a text into lines of at most 98 columns.
func wrap(text string) string {
	const most = 98
	var b strings.Builder
	column := 0
	for _, word := range strings.Fields(text) {
		n := len([]rune(word))
		switch {
		case column == 0:
		case column+1+n > most:
			b.WriteString("\n  ")
			column = 2
		default:
			b.WriteString(" ")
			column++
		}
		b.WriteString(word)
		column += n
	}
	return b.String() + "\n"
}
