package crosssections

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"ionfall/internal/bib"
)

// TableFile is a table of the project's own form: what it says about itself, and its rows.
type TableFile struct {
	What   string // the cross section in words
	Frame  Frame  // meaning of the energy
	Source Source // where the numbers come from
	Table  Table  // the rows; Onset is not known to the file
	SHA256 string // of the file, hexadecimal

	lines []int // of the rows, for messages
}

// columnLine is the line between header and rows.
const columnLine = "energy_eV,cross_section_m2"

var (
	headerKeys = []string{
		"what", "reference", "database", "date", "status", "frame", "bib", "valid_to_eV", "note",
	}
	requiredKeys = []string{"what", "reference", "status", "frame"}
	statuses     = []string{"read", "computed", "derived", "memory"}

	day = regexp.MustCompile(`^[12]\d{3}-(0[1-9]|1[0-2])-(0[1-9]|[12]\d|3[01])$`)
)

// ReadTable reads a table of the project's own form: comment lines `# key: value` with the keys
// what, reference, database, date, status, frame, bib, valid_to_eV and note (which may repeat),
// the line energy_eV,cross_section_m2, and the rows. Further comment lines may stand among the
// rows. The name is for messages.
func ReadTable(name string, data []byte) (*TableFile, error) {
	r := tableReader{complaints: complaints{file: name}, seen: map[string]int{}}
	if len(data) > MaxTableFileBytes {
		r.add(0, 0, "", fmt.Sprintf("%d bytes", len(data)),
			fmt.Sprintf("at most %d", MaxTableFileBytes))
		return nil, r.err()
	}
	line := 0
	for text := range bytes.Lines(data) {
		line++
		r.line(line, strings.TrimRight(string(text), "\r\n"))
		if r.full() {
			break
		}
	}
	r.finish(line)
	if err := r.err(); err != nil {
		return nil, err
	}
	sum := sha256.Sum256(data)
	r.out.SHA256 = hex.EncodeToString(sum[:])
	return &r.out, nil
}

type tableReader struct {
	complaints
	out     TableFile
	seen    map[string]int // line of each header key
	inRows  bool
	tooMany bool
}

func (r *tableReader) line(line int, text string) {
	switch {
	case strings.TrimSpace(text) == "":
	case strings.HasPrefix(text, "#"):
		if !r.inRows {
			r.header(line, text)
		}
	case !r.inRows:
		r.inRows = true
		if text != columnLine {
			r.add(line, 1, "", quoted(text), "the line "+strconv.Quote(columnLine))
		}
	default:
		r.row(line, text)
	}
}

func (r *tableReader) header(line int, text string) {
	key, value, found := strings.Cut(text[1:], ":")
	key, value = strings.TrimSpace(key), strings.TrimSpace(value)
	if !found || value == "" {
		r.add(line, 1, "", quoted(text), `a line "# key: value"`)
		return
	}
	if !slices.Contains(headerKeys, key) {
		r.addHint(line, 3, "", "unknown key "+quoted(key),
			"one of "+strings.Join(headerKeys, ", "), didYouMean(key, headerKeys))
		return
	}
	if first, dup := r.seen[key]; dup && key != "note" {
		r.add(line, 3, key, "a second value", fmt.Sprintf("one (the first is on line %d)", first))
		return
	}
	r.seen[key] = line
	r.value(line, strings.Index(text, value)+1, key, value)
}

// value takes one value of the header.
func (r *tableReader) value(line, col int, key, value string) {
	s := &r.out.Source
	switch key {
	case "what":
		r.out.What = value
	case "reference":
		s.Citation = value
	case "database":
		s.Database = value
	case "note":
		s.Note = strings.TrimSpace(s.Note + " " + value)
	case "date":
		s.Date = value
		if !day.MatchString(value) {
			r.add(line, col, key, quoted(value), "a day as 2013-06-04")
		}
	case "status":
		s.Status = value
		if !slices.Contains(statuses, value) {
			r.add(line, col, key, quoted(value), "one of "+strings.Join(statuses, ", "))
		}
	case "bib":
		s.Bib = value
		if _, ok := bib.Lookup(value); !ok {
			r.addHint(line, col, key, quoted(value), "a known reference",
				didYouMean(value, bib.Keys()))
		}
	case "frame":
		frame, ok := parseFrame(value)
		r.out.Frame = frame
		if !ok {
			r.add(line, col, key, quoted(value), Lab.String()+" or "+CenterOfMass.String())
		}
	case "valid_to_eV":
		v, err := strconv.ParseFloat(value, 64)
		r.out.Table.ValidTo = v
		if err != nil || !(v > 0 && v <= maxEnergyEV) {
			r.add(line, col, key, quoted(value), "an energy in eV above 0")
		}
	}
}

func (r *tableReader) row(line int, text string) {
	if len(r.out.lines) >= maxRows {
		if !r.tooMany {
			r.add(line, 1, "", fmt.Sprintf("more than %d rows", maxRows), "fewer")
		}
		r.tooMany = true
		return
	}
	first, second, found := strings.Cut(text, ",")
	if !found {
		r.add(line, 1, "", quoted(text), "two numbers with a comma between them")
		return
	}
	energy, ok1 := r.number(line, 1, "energy_eV", first, maxEnergyEV, "eV")
	q, ok2 := r.number(line, len(first)+2, "cross_section_m2", second, maxCrossSection, "m2")
	if !ok1 || !ok2 {
		return
	}
	t := &r.out.Table
	if n := len(t.Energy); n > 0 && energy <= t.Energy[n-1] {
		r.add(line, 1, "energy_eV", fmt.Sprintf("%g eV after %g eV", energy, t.Energy[n-1]),
			"increasing energies")
		return
	}
	t.Energy = append(t.Energy, energy)
	t.CrossSection = append(t.CrossSection, q)
	r.out.lines = append(r.out.lines, line)
}

// number is a value of a row, from 0 to most.
func (r *tableReader) number(line, col int, key, text string, most float64, unit string) (
	float64, bool,
) {
	want := fmt.Sprintf("a number from 0 to %g %s", most, unit)
	v, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
	if err != nil || math.IsNaN(v) || v < 0 || v > most {
		r.add(line, col, key, quoted(text), want)
		return 0, false
	}
	return v, true
}

// finish checks what can be known only at the end of the file.
func (r *tableReader) finish(lines int) {
	for _, key := range requiredKeys {
		if r.seen[key] == 0 {
			r.add(1, 1, key, "nothing", "a header line `# "+key+": ...`")
		}
	}
	if len(r.out.lines) == 0 && len(r.list) == 0 {
		r.add(lines, 1, "", "no rows", "at least one")
	}
}
