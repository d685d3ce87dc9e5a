package crosssections

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
)

// exchangeKeywords are the first lines of blocks and what they mean.
var exchangeKeywords = []struct {
	word string
	kind Kind
}{
	{"ELASTIC", Elastic},
	{"EFFECTIVE", Effective},
	{"EXCITATION", Excitation},
	{"ROTATION", Excitation},
	{"ROTATIONAL", Excitation},
	{"VIBRATION", Excitation},
	{"VIBRATIONAL", Excitation},
	{"IONIZATION", Ionization},
	{"ATTACHMENT", Attachment},
}

// ReadExchange reads a file in the exchange form of the open-access repositories. A block is a
// keyword (ELASTIC, EFFECTIVE, EXCITATION, ROTATION, VIBRATION, IONIZATION or ATTACHMENT), a
// line with the target (and, behind an arrow, the product), a line with the mass ratio or the
// threshold (none for attachment; with `<->` also the ratio of the statistical weights), then
// comments and a table of two columns between lines of dashes. What stands between blocks is
// passed over, except the names of the database and the reference. The name is for messages.
func ReadExchange(name string, r io.Reader) (*Exchange, error) {
	data, err := io.ReadAll(io.LimitReader(r, maxExchangeFileBytes+1))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	x := exchangeReader{complaints: complaints{file: name}}
	if len(data) > maxExchangeFileBytes {
		x.add(0, 0, "", "a larger file", fmt.Sprintf("at most %d bytes", maxExchangeFileBytes))
		return nil, x.err()
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf")) // byte-order mark
	for text := range bytes.Lines(data) {
		x.line++
		x.next(strings.TrimSpace(string(text)))
		if x.full() {
			break
		}
	}
	x.finish()
	if err := x.err(); err != nil {
		return nil, err
	}
	return &x.out, nil
}

// part is where in the file the reader is.
type part int

const (
	between    part = iota // blocks
	atTarget               // second line of a block
	atNumber               // third line of a block
	inComments             // before the first dashes
	inTable                // between the dashes
)

type exchangeReader struct {
	complaints
	out       Exchange
	line      int
	part      part
	dashed    bool // the last line between blocks was one of dashes
	bad       bool // something is wrong with the block
	block     Block
	units     units
	database  string
	reference string
}

func (x *exchangeReader) next(text string) {
	if x.part != between && x.part != inTable {
		if _, ok := exchangeKeyword(text); ok {
			x.add(x.line, 1, "", "the keyword "+text+" within the block of line "+
				strconv.Itoa(x.block.Line), "its table first")
			x.part = between
		}
	}
	switch x.part {
	case between:
		x.outside(text)
	case atTarget:
		x.target(text)
	case atNumber:
		x.parameter(text)
	case inComments:
		x.comment(text)
	case inTable:
		x.row(text)
	}
}

// outside is a line between blocks. A table there would be lost, so it is an error.
func (x *exchangeReader) outside(text string) {
	if kind, ok := exchangeKeyword(text); ok {
		if len(x.out.Blocks) >= maxProcesses {
			x.add(x.line, 1, "", fmt.Sprintf("more than %d blocks", maxProcesses), "fewer")
		}
		x.block = Block{
			Kind: kind, Keyword: text, Line: x.line, Database: x.database, Reference: x.reference,
		}
		x.units, x.part, x.dashed, x.bad = units{1, 1}, atTarget, false, false
		return
	}
	if x.dashed {
		if _, ok := rowNumbers(text); ok {
			x.add(x.line, 1, "", "a table without a block", "before it one of "+keywordList())
		}
	}
	x.dashed = isDashes(text)
	if v, ok := strings.CutPrefix(text, "DATABASE:"); ok {
		x.database, x.reference = strings.TrimSpace(v), ""
	}
	for _, key := range []string{"HOW TO REFERENCE:", "REFERENCE:"} {
		if v, ok := strings.CutPrefix(text, key); ok {
			x.reference = strings.TrimSpace(v)
		}
	}
}

// target is the second line: "A", "A -> B" or "A <-> B".
func (x *exchangeReader) target(text string) {
	left, right, found := cutArrow(text)
	b := &x.block
	b.Target = strings.TrimSpace(left)
	if found {
		b.Product = strings.TrimSpace(right)
		b.TwoWay = strings.Contains(text, "<->")
	}
	if b.Target == "" || isDashes(text) {
		x.wrong(quoted(text), "the target, as in \"A\" or \"A -> A*\"")
	}
	if b.TwoWay && b.Kind != Excitation {
		x.wrong(quoted(text), "-> : only an excitation runs both ways")
	}
	x.part = atNumber
	if b.Kind == Attachment {
		x.part = inComments
	}
}

// parameter is the third line: mass ratio or threshold, and the ratio of weights.
func (x *exchangeReader) parameter(text string) {
	b := &x.block
	x.part = inComments
	v, ok := numbers(text, 1)
	switch {
	case !ok:
		x.wrong(quoted(text), "a number: the mass ratio or the threshold in eV")
		if isDashes(text) {
			x.part = inTable
		}
	case !b.Kind.NeedsThreshold():
		b.MassRatio = v[0]
		if !(v[0] >= 0 && v[0] < 1) {
			x.wrong(quoted(text), "the electron's mass over that of the target, below 1")
		}
	default:
		b.Threshold = v[0]
		if !(v[0] > 0 && v[0] <= maxEnergyEV) {
			x.wrong(quoted(text), "a threshold above 0 eV")
		}
	}
	if !b.TwoWay || x.bad {
		return
	}
	if v, ok = numbers(text, 2); !ok || !(v[1] > 0) || math.IsInf(v[1], 0) {
		x.wrong(quoted(text), "the threshold and the ratio of the statistical weights")
		return
	}
	b.WeightRatio = v[1]
}

func (x *exchangeReader) comment(text string) {
	switch {
	case isDashes(text):
		x.part = inTable
	case text == "":
	default:
		x.block.Comments = append(x.block.Comments, text)
		if columns, ok := strings.CutPrefix(text, "COLUMNS:"); ok {
			u, err := parseUnits(columns)
			if err != nil {
				x.wrong(quoted(columns), err.Error())
				return
			}
			x.units = u
		}
	}
}

func (x *exchangeReader) row(text string) {
	if isDashes(text) {
		x.endTable()
		return
	}
	if text == "" {
		return
	}
	if _, ok := exchangeKeyword(text); ok {
		x.wrong("the keyword "+text, "dashes at the end of the table")
		x.part = between
		x.outside(text)
		return
	}
	v, ok := rowNumbers(text)
	if !ok {
		x.wrong(quoted(text), "an energy and a cross section, or dashes")
		return
	}
	energy, q := v[0]*x.units.energy, v[1]*x.units.area
	t := &x.block.Table
	n := len(t.Energy)
	switch {
	case !(energy >= 0 && energy <= maxEnergyEV):
		x.wrong(quoted(text), "an energy that is not negative")
	case !(q >= 0 && q <= maxCrossSection):
		x.wrong(quoted(text), fmt.Sprintf("a cross section from 0 to %g m2", maxCrossSection))
	case n >= maxRows:
		x.wrong(fmt.Sprintf("more than %d rows", maxRows), "fewer")
	case n > 0 && energy < t.Energy[n-1]:
		x.wrong(fmt.Sprintf("%g eV after %g eV", energy, t.Energy[n-1]), "increasing energies")
	case n > 0 && energy == t.Energy[n-1]:
		x.repeated(energy, q)
	default:
		t.Energy, t.CrossSection = append(t.Energy, energy), append(t.CrossSection, q)
	}
}

// repeated is a row at the energy of the one before: the same again, or a step.
func (x *exchangeReader) repeated(energy, q float64) {
	t := &x.block.Table
	if t.CrossSection[len(t.CrossSection)-1] == q {
		x.warn("the row at %g eV stands twice; it is used once", energy)
		return
	}
	x.warn("two cross sections at %g eV; taken as a step", energy)
	t.Energy = append(t.Energy, math.Nextafter(energy, math.Inf(1)))
	t.CrossSection = append(t.CrossSection, q)
}

// endTable completes the block.
func (x *exchangeReader) endTable() {
	x.part = between
	b := &x.block
	if len(b.Table.Energy) == 0 && !x.bad {
		x.wrong("an empty table", "rows with an energy and a cross section")
	}
	if x.bad {
		return
	}
	for i, e := range b.Table.Energy {
		if e < b.Threshold && b.Table.CrossSection[i] > 0 {
			x.warn("the cross section is not 0 at %g eV, below the threshold of %g eV; "+
				"it is taken as 0 there", e, b.Threshold)
			break
		}
	}
	b.Table.Onset = onset(b.Kind, b.Threshold, b.Table.Energy)
	x.out.Blocks = append(x.out.Blocks, *b)
}

func (x *exchangeReader) finish() {
	if x.full() {
		return
	}
	if x.part != between {
		x.add(x.line, 1, "", "the end of the file within the block of line "+
			strconv.Itoa(x.block.Line), "a table closed by dashes")
	}
	if len(x.out.Blocks) == 0 && len(x.list) == 0 {
		x.add(x.line, 1, "", "no block", "one of "+keywordList())
	}
}

// wrong notes an error of the block at the current line.
func (x *exchangeReader) wrong(got, want string) {
	x.bad = true
	x.add(x.line, 1, x.block.Keyword, got, want)
}

func (x *exchangeReader) warn(format string, args ...any) {
	if len(x.out.Warnings) < maxErrors {
		x.out.Warnings = append(x.out.Warnings, fmt.Sprintf("%s:%d: %s %s: ", x.file, x.line,
			x.block.Keyword, x.block.Target)+fmt.Sprintf(format, args...))
	}
}

func exchangeKeyword(text string) (Kind, bool) {
	for _, k := range exchangeKeywords {
		if text == k.word {
			return k.kind, true
		}
	}
	return 0, false
}

func keywordList() string {
	var words []string
	for _, k := range exchangeKeywords {
		words = append(words, k.word)
	}
	slices.Sort(words)
	return strings.Join(words, ", ")
}
