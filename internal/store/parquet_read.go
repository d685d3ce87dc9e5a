package store

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"strconv"

	"github.com/parquet-go/parquet-go"

	"ionfall/internal/table"
)

// ReadTable reads a table that WriteTable wrote, with its labels.
func ReadTable(path string) (*table.Table, error) {
	t, _, err := readTable(path, true)
	return t, err
}

// ReadMeta reads the metadata of a table: the entries that WriteTable was given, and its own.
func ReadMeta(path string) (map[string]string, error) {
	_, meta, err := readTable(path, false)
	return meta, err
}

func readTable(path string, values bool) (*table.Table, map[string]string, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, nil, err
	}
	var t *table.Table
	var meta map[string]string
	info, err := f.Stat()
	if err == nil {
		t, meta, err = decodeTable(f, info.Size(), values)
	}
	if err != nil {
		err = fmt.Errorf("%s: %w", path, err)
	}
	if err = errors.Join(err, f.Close()); err != nil {
		return nil, nil, err
	}
	return t, meta, nil
}

func decodeTable(f io.ReaderAt, size int64, values bool) (*table.Table, map[string]string, error) {
	if err := verifySeal(f, size); err != nil {
		return nil, nil, err
	}
	in, err := parquet.OpenFile(f, size, parquet.SkipPageIndex(true),
		parquet.SkipBloomFilters(true))
	if err != nil {
		return nil, nil, err
	}
	meta := map[string]string{}
	for _, entry := range in.Metadata().KeyValueMetadata {
		meta[entry.Key] = entry.Value
	}
	t, err := labelled(meta)
	if err != nil || !values {
		return t, meta, err
	}
	fields := in.Schema().Fields()
	if len(fields) != len(t.Columns) {
		return nil, nil, fmt.Errorf("%d columns, but labels for %d", len(fields), len(t.Columns))
	}
	for i, field := range fields {
		c := &t.Columns[i]
		if field.Name() != c.Name {
			return nil, nil, fmt.Errorf("column %q has the label of %q", field.Name(), c.Name)
		}
		if err := decodeColumn(c, in, field, i); err != nil {
			return nil, nil, fmt.Errorf("column %q: %w", c.Name, err)
		}
		if int64(c.Len()) != in.NumRows() {
			return nil, nil, fmt.Errorf("column %q: %d values in %d rows",
				c.Name, c.Len(), in.NumRows())
		}
	}
	return t, meta, nil
}

// labelled returns the table that the metadata describe, its columns without values.
func labelled(meta map[string]string) (*table.Table, error) {
	written, ok := meta[keyVersion]
	if !ok {
		return nil, fmt.Errorf("not a table of this program: no %q in its metadata", keyVersion)
	}
	version, err := strconv.Atoi(written)
	if err != nil {
		return nil, fmt.Errorf("%s %q, want a whole number", keyVersion, written)
	}
	if version > SchemaVersion {
		return nil, fmt.Errorf("written by a newer version: %s %d, this program reads up to %d",
			keyVersion, version, SchemaVersion)
	}
	var labels []label
	if err := json.Unmarshal([]byte(meta[keyColumns]), &labels); err != nil {
		return nil, fmt.Errorf("labels of the columns: %w", err)
	}
	t := table.New(meta[keyTable], meta[keyTitle])
	for _, l := range labels {
		t.Columns = append(t.Columns, table.Column{Name: l.Name, Unit: l.Unit, Doc: l.Doc})
	}
	return t, nil
}

// decodeColumn appends the values of all row groups, page by page.
func decodeColumn(c *table.Column, in *parquet.File, field parquet.Field, i int) error {
	if !field.Leaf() || !field.Required() {
		return errors.New("want one value in every row")
	}
	switch kind := field.Type().Kind(); kind {
	case parquet.Double:
		c.Float = []float64{}
	case parquet.Int64:
		c.Int = []int64{}
	case parquet.ByteArray:
		c.Text = []string{}
	default:
		return fmt.Errorf("holds %s, want DOUBLE, INT64 or BYTE_ARRAY", kind)
	}
	for _, group := range in.RowGroups() {
		pages := group.ColumnChunks()[i].Pages()
		err := decodePages(c, pages)
		if err = errors.Join(err, pages.Close()); err != nil {
			return err
		}
	}
	return nil
}

func decodePages(c *table.Column, pages parquet.Pages) error {
	for {
		page, err := pages.ReadPage()
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return err
		}
		err = decodePage(c, page)
		parquet.Release(page)
		if err != nil {
			return err
		}
	}
}

// decodePage reads a page in bulk where its reader knows the type, else value by value.
func decodePage(c *table.Column, page parquet.Page) error {
	n := int(page.NumValues())
	if n == 0 {
		return nil
	}
	values := page.Values()
	if r, ok := values.(parquet.DoubleReader); ok && c.Float != nil {
		from := len(c.Float)
		c.Float = append(c.Float, make([]float64, n)...)
		return full(r.ReadDoubles(c.Float[from:]))(n)
	}
	if r, ok := values.(parquet.Int64Reader); ok && c.Int != nil {
		from := len(c.Int)
		c.Int = append(c.Int, make([]int64, n)...)
		return full(r.ReadInt64s(c.Int[from:]))(n)
	}
	buffer := make([]parquet.Value, n)
	if err := full(values.ReadValues(buffer))(n); err != nil {
		return err
	}
	for _, v := range buffer {
		switch {
		case c.Float != nil:
			c.Float = append(c.Float, v.Double())
		case c.Int != nil:
			c.Int = append(c.Int, v.Int64())
		default:
			c.Text = append(c.Text, string(v.ByteArray()))
		}
	}
	return nil
}

// full turns the answer of a reader into an error unless it read all n values.
func full(got int, err error) func(n int) error {
	return func(n int) error {
		switch {
		case err != nil && !errors.Is(err, io.EOF):
			return err
		case got != n:
			return fmt.Errorf("page of %d values ends after %d", n, got)
		}
		return nil
	}
}
