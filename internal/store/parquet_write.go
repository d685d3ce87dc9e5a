package store

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"maps"
	"slices"

	"github.com/parquet-go/parquet-go"

	"ionfall/internal/table"
)

const (
	// SchemaVersion is that of the metadata of tables. A reader refuses a newer one.
	SchemaVersion = 1
	tableSuffix   = ".parquet"

	keyVersion = "schema_version"
	keyTable   = "table"
	keyTitle   = "title"
	keyColumns = "columns"

	// valueBatch is how many values are handed to the encoder at once.
	valueBatch = 4096
	// rowGroup bounds the rows that readers have to hold at once.
	rowGroup = 1 << 20
)

// label is what the metadata of a file say about one of its columns.
type label struct {
	Name string `json:"name"`
	Unit string `json:"unit"`
	Doc  string `json:"doc"`
}

// orderedGroup is a group whose columns stand in the order of the table; a plain one sorts them.
type orderedGroup struct {
	parquet.Group
	fields []parquet.Field
}

// Fields returns the columns in the order of the table.
func (g orderedGroup) Fields() []parquet.Field { return g.fields }

// WriteTable writes a table as <name>.parquet, with its labels and the given entries (provenance)
// in the metadata of the file.
func (r *Run) WriteTable(t *table.Table, meta map[string]string) error {
	content, err := tableContent(t, meta)
	if err != nil {
		return err
	}
	return r.write(t.Name+tableSuffix, content)
}

// writeWhole writes a table with its seal.
func writeWhole(w io.Writer, t *table.Table, meta map[string]string) error {
	var whole bytes.Buffer // its end, which the seal precedes, is known only when it is whole
	if err := encodeTable(&whole, t, meta); err != nil {
		return err
	}
	return writeSealed(w, whole.Bytes())
}

func metadata(t *table.Table) (map[string]string, error) {
	labels := make([]label, len(t.Columns))
	for i, c := range t.Columns {
		labels[i] = label{c.Name, c.Unit, c.Doc}
	}
	columns, err := json.Marshal(labels)
	if err != nil {
		return nil, err
	}
	return map[string]string{
		keyVersion: fmt.Sprint(SchemaVersion), keyTable: t.Name,
		keyTitle: t.Doc, keyColumns: string(columns),
	}, nil
}

func schemaOf(t *table.Table) *parquet.Schema {
	group := parquet.Group{}
	order := map[string]int{}
	for i, c := range t.Columns {
		group[c.Name] = nodeOf(c)
		order[c.Name] = i
	}
	fields := group.Fields()
	slices.SortFunc(fields, func(a, b parquet.Field) int {
		return order[a.Name()] - order[b.Name()]
	})
	return parquet.NewSchema(t.Name, orderedGroup{group, fields})
}

func nodeOf(c table.Column) parquet.Node {
	switch {
	case c.Text != nil: // few different ones: names of species, electrodes, regions
		return parquet.Encoded(parquet.String(), &parquet.RLEDictionary)
	case c.Int != nil:
		return parquet.Leaf(parquet.Int64Type)
	}
	return parquet.Leaf(parquet.DoubleType)
}

func encodeTable(w io.Writer, t *table.Table, meta map[string]string) error {
	out := parquet.NewGenericWriter[any](w, schemaOf(t), parquet.Compression(&parquet.Zstd),
		parquet.CreatedBy("ionfall", fmt.Sprint(SchemaVersion), ""))
	for _, key := range slices.Sorted(maps.Keys(meta)) {
		out.SetKeyValueMetadata(key, meta[key])
	}
	for from := 0; from < t.Rows(); from += rowGroup {
		to := min(from+rowGroup, t.Rows())
		for i, column := range out.ColumnWriters() {
			if err := encodeColumn(column, t.Columns[i], i, from, to); err != nil {
				return fmt.Errorf("column %q: %w", t.Columns[i].Name, err)
			}
		}
		if err := out.Flush(); err != nil {
			return err
		}
	}
	return out.Close()
}

// encodeColumn hands the rows from..to of column number i to its encoder.
func encodeColumn(w *parquet.ColumnWriter, c table.Column, i, from, to int) error {
	batch := make([]parquet.Value, 0, valueBatch)
	for row := from; row < to; row++ {
		var v parquet.Value
		switch {
		case c.Text != nil:
			v = parquet.ByteArrayValue([]byte(c.Text[row]))
		case c.Int != nil:
			v = parquet.Int64Value(c.Int[row])
		default:
			v = parquet.DoubleValue(c.Float[row])
		}
		batch = append(batch, v.Level(0, 0, i))
		if len(batch) == valueBatch || row == to-1 {
			if _, err := w.WriteRowValues(batch); err != nil {
				return err
			}
			batch = batch[:0]
		}
	}
	return nil
}
