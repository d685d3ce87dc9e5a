package codec

import (
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"io"
	"math"
)

// Encoder collects the sections of one file and then writes them. It keeps references to the
// arrays: they must not change before WriteTo has returned.
type Encoder struct {
	kind     string
	version  uint32
	sections []section
	names    map[string]bool
}

// section is one named value of a file; payload is its bytes, not copied.
type section struct {
	name    string
	typ     valueType
	payload []byte
}

// NewEncoder starts a file that holds the given kind of data in the given version of its layout.
// It panics on a kind that is empty or too long.
func NewEncoder(kind string, version uint32) *Encoder {
	if kind == "" || len(kind) > maxName {
		panic(fmt.Sprintf("codec: kind of %d bytes, want 1 to %d", len(kind), maxName))
	}
	return &Encoder{kind: kind, version: version, names: map[string]bool{}}
}

// Float64s adds an array. Like every adder it panics when the name is empty, too long or taken.
func (e *Encoder) Float64s(name string, v []float64) { e.add(name, typeFloat64s, toBytes(v)) }

// Int64s adds an array.
func (e *Encoder) Int64s(name string, v []int64) { e.add(name, typeInt64s, toBytes(v)) }

// Uint64s adds an array.
func (e *Encoder) Uint64s(name string, v []uint64) { e.add(name, typeUint64s, toBytes(v)) }

// Uint32s adds an array.
func (e *Encoder) Uint32s(name string, v []uint32) { e.add(name, typeUint32s, toBytes(v)) }

// Bytes adds bytes.
func (e *Encoder) Bytes(name string, v []byte) { e.add(name, typeBytes, v) }

// Float64 adds one number.
func (e *Encoder) Float64(name string, v float64) {
	e.add(name, typeFloat64, binary.LittleEndian.AppendUint64(nil, math.Float64bits(v)))
}

// Int64 adds one whole number.
func (e *Encoder) Int64(name string, v int64) {
	e.add(name, typeInt64, binary.LittleEndian.AppendUint64(nil, uint64(v)))
}

// String adds a text.
func (e *Encoder) String(name, v string) { e.add(name, typeString, []byte(v)) }

func (e *Encoder) add(name string, typ valueType, payload []byte) {
	if name == "" || len(name) > maxName {
		panic(fmt.Sprintf("codec: section name of %d bytes, want 1 to %d", len(name), maxName))
	}
	if e.names[name] {
		panic(fmt.Sprintf("codec: section %q added twice", name))
	}
	e.names[name] = true
	e.sections = append(e.sections, section{name: name, typ: typ, payload: payload})
}

// Size returns the length of the file that WriteTo writes.
func (e *Encoder) Size() int64 {
	n := int64(fixedHeader+len(e.kind)) + trailerLen
	for _, s := range e.sections {
		n += int64(fixedSection+len(s.name)) + int64(len(s.payload))
	}
	return n
}

// WriteTo writes the file and returns the bytes written. It may be called again.
func (e *Encoder) WriteTo(w io.Writer) (int64, error) {
	out := &summedWriter{w: w}
	out.write(e.header())
	for _, s := range e.sections {
		out.write(s.header())
		out.write(s.payload)
		out.write(sum(s.payload))
	}
	out.write(binary.LittleEndian.AppendUint32(nil, out.crc))
	return out.n, out.err
}

func (e *Encoder) header() []byte {
	le := binary.LittleEndian
	b := append([]byte(nil), magic...)
	b = le.AppendUint32(b, e.version)
	b = le.AppendUint32(b, uint32(len(e.sections)))
	b = le.AppendUint64(b, uint64(e.Size()))
	b = le.AppendUint32(b, uint32(len(e.kind)))
	b = append(b, e.kind...)
	return append(b, sum(b)...)
}

func (s section) header() []byte {
	le := binary.LittleEndian
	b := []byte{byte(s.typ)}
	b = le.AppendUint32(b, uint32(len(s.name)))
	b = le.AppendUint64(b, uint64(len(s.payload)))
	b = append(b, s.name...)
	return append(b, sum(b)...)
}

// sum returns the check of b as the file holds it.
func sum(b []byte) []byte {
	return binary.LittleEndian.AppendUint32(nil, crc32.Checksum(b, castagnoli()))
}

// summedWriter keeps the count, the running check and the first error of what passes through it.
type summedWriter struct {
	w   io.Writer
	n   int64
	crc uint32
	err error
}

func (s *summedWriter) write(b []byte) {
	if s.err != nil || len(b) == 0 {
		return
	}
	n, err := s.w.Write(b)
	s.n += int64(n)
	if err == nil && n < len(b) {
		err = io.ErrShortWrite
	}
	s.err = err
	s.crc = crc32.Update(s.crc, castagnoli(), b)
}
