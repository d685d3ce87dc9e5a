package scan

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// Plan is a scan that has been read and checked: every point of it is a valid input.
type Plan struct {
	Name   string // of the plan's file or folder
	Axes   []Axis
	Points []Point

	planned int    // points of the plan itself; those after them were added by a search
	file    string // of the plan
	folder  string // in which relative names of the base are looked up
	text    []byte // of the plan
	base    []byte // as given
	list    []byte // of the points, if they come from a file
	tree    *yaml.Node
	origin  *config.Case // the base
	sampled sampling
	errs    inputerr.List
}

// Axis is an input path that varies.
type Axis struct {
	Path string // drive.tones.0.amplitude
	Unit string // SI, as the table of points writes it; "" for a pure number
	Text bool   // the values are no numbers: a mixture, a word

	values    []*yaml.Node // of a grid, in order
	low, high float64      // of a range, in Unit
	log       bool         // the range is taken in its logarithm
	ranged    bool
	suffix    string // unit of input texts
	node      *yaml.Node
}

// Point is one run of a scan.
type Point struct {
	Number int
	Input  []byte    // the whole input file
	Texts  []string  // on each axis, in SI units, as the resolved input has it
	Values []float64 // the same as numbers; NaN for what is none
}

// sampling is how the points of ranges are chosen.
type sampling struct {
	method string
	points int
	seed   uint64
}

// The methods of sampling.
const (
	methodGrid   = "grid"
	methodLatin  = "latin_hypercube"
	methodHalton = "halton"
)

// Names of files in the folder of a scan.
const (
	planFile = "plan.yaml"
	baseFile = "base.yaml"
	listFile = "list.csv"
)

// Load reads a plan from its file, or from the folder of a scan. The error is an inputerr.List
// where the plan is to blame.
func Load(path string) (*Plan, error) {
	info, err := os.Stat(path)
	if err == nil && info.IsDir() {
		return load(filepath.Join(path, planFile), path)
	}
	return load(path, "")
}

// load reads a plan; kept is the folder of the scan, whose copies of the files count.
func load(path, kept string) (*Plan, error) {
	text, bad := readFile(path, maxPlanBytes)
	if bad != nil {
		return nil, inputerr.List{bad}
	}
	name := strings.TrimSuffix(filepath.Base(path), filepath.Ext(path))
	if name == "plan" {
		if full, err := filepath.Abs(path); err == nil {
			name = filepath.Base(filepath.Dir(full))
		}
	}
	p := &Plan{Name: name, file: path, folder: filepath.Dir(path), text: text}
	root, bad := parseYAML(path, text)
	if bad != nil {
		return nil, inputerr.List{bad}
	}
	p.read(root, kept)
	if err := p.errs.Err(); err != nil {
		return nil, err
	}
	p.planned = len(p.Points)
	return p, nil
}

// readFile is the content of a regular file.
func readFile(path string, most int64) ([]byte, *inputerr.Error) {
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, os.ErrNotExist):
		return nil, &inputerr.Error{File: path, Hint: "no such file"}
	case err != nil:
		return nil, &inputerr.Error{File: path, Hint: "cannot be read: " + err.Error()}
	case !info.Mode().IsRegular() || info.Size() > most:
		return nil, &inputerr.Error{
			File: path, Got: fmt.Sprintf("%s of %d bytes", info.Mode().Type(), info.Size()),
			Want: fmt.Sprintf("a regular file of at most %d bytes", most),
		}
	}
	text, err := os.ReadFile(path)
	if err != nil {
		return nil, &inputerr.Error{File: path, Hint: "cannot be read: " + err.Error()}
	}
	return text, nil
}

// parseYAML gives the content of the only document.
func parseYAML(path string, text []byte) (*yaml.Node, *inputerr.Error) {
	bad := func(err error) *inputerr.Error {
		var place *yaml.LoadError
		e := &inputerr.Error{File: path, Hint: "not valid YAML: " + err.Error()}
		if errors.As(err, &place) {
			e.Line, e.Col = place.Mark.Line, place.Mark.Column
			e.Hint = "not valid YAML: " + place.Message
		}
		return e
	}
	loader, err := yaml.NewLoader(bytes.NewReader(text))
	if err != nil {
		return nil, bad(err)
	}
	var doc yaml.Node
	if err := loader.Load(&doc); err != nil || len(doc.Content) == 0 {
		if err == nil || len(bytes.TrimSpace(text)) == 0 {
			return nil, &inputerr.Error{File: path, Got: "an empty file", Want: planWanted}
		}
		return nil, bad(err)
	}
	return doc.Content[0], nil
}

const planWanted = "a mapping with base, and vary or points"

// read takes the plan apart.
func (p *Plan) read(root *yaml.Node, kept string) {
	keys := p.mapping(root, "", planWanted, "base", "vary", "sampling", "points")
	if keys == nil {
		return
	}
	if !p.readBase(root, keys["base"], kept) {
		return
	}
	vary, points := keys["vary"], keys["points"]
	switch {
	case vary == nil && points == nil:
		p.fail(root, "", "neither vary nor points", "one of them", "")
	case vary != nil && points != nil:
		p.fail(points, "points", "vary and points", "one of them",
			"a list of points says all by itself")
	case points != nil:
		if s := keys["sampling"]; s != nil {
			p.fail(s, "sampling", "sampling with a list of points", "vary instead of points", "")
			return
		}
		p.readList(points, kept)
	default:
		p.readSampling(keys["sampling"])
		p.readAxes(vary)
		if len(p.errs) == 0 {
			p.choosePoints()
		}
	}
}

// fileKeys are the input paths that name files.
func fileKeys() []string { return []string{"gas.library", "drive.trace.file"} }

// readBase reads and checks the base input.
func (p *Plan) readBase(root, n *yaml.Node, kept string) bool {
	if n == nil {
		p.fail(root, "base", "nothing", "the name of an input file", "the key is required")
		return false
	}
	if n.Kind != yaml.ScalarNode || n.Value == "" {
		p.fail(n, "base", found(n), "the name of an input file", "")
		return false
	}
	path := n.Value
	if !filepath.IsAbs(path) {
		path = filepath.Join(p.folder, path)
	}
	if kept != "" {
		path = filepath.Join(kept, baseFile)
	}
	c, src, err := config.Load(path)
	if err != nil {
		var list inputerr.List
		if errors.As(err, &list) {
			p.errs = append(p.errs, list...)
		} else {
			p.fail(n, "base", n.Value, "a readable input", err.Error())
		}
		return false
	}
	tree, bad := parseYAML(path, src)
	if bad != nil {
		p.errs = append(p.errs, bad)
		return false
	}
	p.origin, p.tree = c, tree
	changed := false
	for _, key := range fileKeys() {
		name := lookup(tree, key)
		if name == nil || filepath.IsAbs(name.Value) {
			continue
		}
		// The inputs of the points stand elsewhere than the base.
		full, err := filepath.Abs(filepath.Join(filepath.Dir(path), name.Value))
		if err != nil {
			p.fail(n, "base", n.Value, "an input whose files can be found", err.Error())
			return false
		}
		set(tree, key, &yaml.Node{Kind: yaml.ScalarNode, Tag: "!!str", Value: full})
		changed = true
	}
	if changed {
		if src, err = yaml.Dump(tree, yaml.WithLineWidth(-1)); err != nil {
			p.fail(n, "base", n.Value, "an input that can be written again", err.Error())
			return false
		}
	}
	p.base = src
	return true
}

// mapping returns the values of a mapping whose keys are known, nil if it is none.
func (p *Plan) mapping(n *yaml.Node, path, want string, known ...string) map[string]*yaml.Node {
	if n.Kind != yaml.MappingNode {
		p.fail(n, path, found(n), want, "")
		return nil
	}
	values := map[string]*yaml.Node{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		k := n.Content[i]
		switch {
		case values[k.Value] != nil:
			p.fail(k, under(path, k.Value), "", "", "duplicate key")
		case !contains(known, k.Value):
			hint := "unknown key; the keys here are " + strings.Join(known, ", ")
			if near := inputerr.Nearest(k.Value, known); near != "" {
				hint = fmt.Sprintf("unknown key; did you mean %q?", near)
			}
			p.fail(k, under(path, k.Value), "", "", hint)
		default:
			values[k.Value] = n.Content[i+1]
		}
	}
	return values
}

func (p *Plan) fail(n *yaml.Node, key, got, want, hint string) {
	p.errs = append(p.errs, &inputerr.Error{
		File: p.file, Line: n.Line, Col: n.Column, Key: key, Got: got, Want: want, Hint: hint,
	})
}
