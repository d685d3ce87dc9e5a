package store

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
)

// Number is a float64 in JSON, which knows neither NaN nor infinity: they are written as null, and
// null is read as NaN.
type Number float64

// MarshalJSON writes all digits, or null.
func (n Number) MarshalJSON() ([]byte, error) {
	if v := float64(n); !math.IsNaN(v) && !math.IsInf(v, 0) {
		return json.Marshal(v)
	}
	return []byte("null"), nil
}

// UnmarshalJSON reads a number or null.
func (n *Number) UnmarshalJSON(b []byte) error {
	if string(b) == "null" {
		*n = Number(math.NaN())
		return nil
	}
	return json.Unmarshal(b, (*float64)(n))
}

// Value is a result: a number, its standard error and its unit. NaN is "no value".
type Value struct {
	Value, SE float64
	Unit      string
}

// valueJSON is the form of a Value in files.
type valueJSON struct {
	Value *Number `json:"value"`
	SE    *Number `json:"se"`
	Unit  *string `json:"unit"`
}

// MarshalJSON writes {"value", "se", "unit"}.
func (v Value) MarshalJSON() ([]byte, error) {
	value, se := Number(v.Value), Number(v.SE)
	return json.Marshal(valueJSON{&value, &se, &v.Unit})
}

// UnmarshalJSON reads {"value", "se", "unit"}, all of them and nothing else.
func (v *Value) UnmarshalJSON(b []byte) error {
	keys := map[string]json.RawMessage{}
	if err := json.Unmarshal(b, &keys); err != nil {
		return err
	}
	if !isValue(keys) {
		return fmt.Errorf("result %s: want the keys value, se, unit", b)
	}
	var value, se Number
	var unit string
	err := errors.Join(json.Unmarshal(keys["value"], &value), json.Unmarshal(keys["se"], &se),
		json.Unmarshal(keys["unit"], &unit))
	*v = Value{float64(value), float64(se), unit}
	return err
}

// isValue reports whether an object has the keys of a Value.
func isValue[T any](object map[string]T) bool {
	_, value := object["value"]
	_, se := object["se"]
	_, unit := object["unit"]
	return len(object) == 3 && value && se && unit
}

// WriteJSON writes v as indented JSON. Numbers in maps and lists that are not finite become null;
// the fields of a struct that may be so must have the type Number or Value.
func (r *Run) WriteJSON(name string, v any) error {
	data, err := encodeJSON(v)
	if err != nil {
		return fmt.Errorf("writing %s: %w", name, err)
	}
	return r.WriteFile(name, data)
}

func encodeJSON(v any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	enc.SetIndent("", "  ")
	if err := enc.Encode(finite(v)); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// finite replaces the numbers in maps and lists by Numbers.
func finite(v any) any {
	switch v := v.(type) {
	case float64:
		return Number(v)
	case float32:
		return Number(v)
	case []float64:
		return mapSlice(v, func(x float64) any { return Number(x) })
	case []any:
		return mapSlice(v, finite)
	case map[string]any:
		return mapValues(v, finite)
	case map[string]float64:
		return mapValues(v, func(x float64) any { return Number(x) })
	}
	return v
}

func mapSlice[T any](v []T, f func(T) any) []any {
	if v == nil {
		return nil
	}
	out := make([]any, len(v))
	for i, x := range v {
		out[i] = f(x)
	}
	return out
}

func mapValues[T any](v map[string]T, f func(T) any) map[string]any {
	if v == nil {
		return nil
	}
	out := make(map[string]any, len(v))
	for key, x := range v {
		out[key] = f(x)
	}
	return out
}

// ReadJSON reads a file into v. The error of a damaged file says where it is damaged.
func ReadJSON(path string, v any) error {
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	dec := json.NewDecoder(bytes.NewReader(data))
	if err := dec.Decode(v); err != nil {
		return fmt.Errorf("%s:%d: %w", path, lineOf(data, dec.InputOffset(), err), err)
	}
	if _, err := dec.Token(); !errors.Is(err, io.EOF) {
		return fmt.Errorf("%s:%d: more after the end of the JSON value",
			path, lineAt(data, dec.InputOffset()))
	}
	return nil
}

// lineOf returns the line that err is about, that of the offset when it does not say.
func lineOf(data []byte, offset int64, err error) int {
	var syntax *json.SyntaxError
	var kind *json.UnmarshalTypeError
	switch {
	case errors.As(err, &syntax):
		offset = syntax.Offset
	case errors.As(err, &kind):
		offset = kind.Offset
	}
	return lineAt(data, offset)
}

func lineAt(data []byte, offset int64) int {
	return 1 + bytes.Count(data[:min(max(offset, 0), int64(len(data)))], []byte("\n"))
}
