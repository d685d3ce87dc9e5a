package codec

import (
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"math"
)

// Decoder gives the sections of a file whose every check has passed. A section that is missing or
// of another type gives a zero value, and Err then says so.
type Decoder struct {
	version  uint32
	names    []string
	sections map[string]section
	err      error
}

// Decode checks the file in b: what it is, that it is whole, and every checksum. The decoder keeps
// b, which must not change while it is used; what its methods return are copies. maxVersion is the
// newest version of the layout that the caller can read.
func Decode(kind string, maxVersion uint32, b []byte) (*Decoder, error) {
	h, err := decodeHeader(b)
	if err != nil {
		return nil, err
	}
	if h.kind != kind {
		return nil, fmt.Errorf("holds %q, want %q", h.kind, kind)
	}
	if h.version > maxVersion {
		return nil, fmt.Errorf("written by a newer version: layout %d of %q, "+
			"this program reads up to %d", h.version, kind, maxVersion)
	}
	if err := h.checkLength(len(b)); err != nil {
		return nil, err
	}
	d := &Decoder{version: h.version, sections: map[string]section{}}
	rest := b[h.size : len(b)-trailerLen]
	for range h.sections {
		if rest, err = d.decodeSection(rest); err != nil {
			return nil, err
		}
	}
	if len(rest) > 0 {
		return nil, fmt.Errorf("%d bytes that belong to no section", len(rest))
	}
	body, trailer := b[:len(b)-trailerLen], b[len(b)-trailerLen:]
	if !matches(body, trailer) {
		return nil, errors.New("checksum of the whole file does not match")
	}
	return d, nil
}

// header is the opening of a file.
type header struct {
	kind     string
	version  uint32
	sections uint32
	total    uint64
	size     int // of the header itself
}

func decodeHeader(b []byte) (header, error) {
	n := min(len(b), len(magic))
	if string(b[:n]) != magic[:n] {
		return header{}, errors.New("not a file of this program: its first bytes are foreign")
	}
	if len(b) < fixedHeader {
		return header{}, fmt.Errorf("truncated: %d bytes, too few for a header", len(b))
	}
	le, at := binary.LittleEndian, len(magic)
	h := header{
		version:  le.Uint32(b[at:]),
		sections: le.Uint32(b[at+4:]),
		total:    le.Uint64(b[at+8:]),
	}
	kindLen := le.Uint32(b[at+16:])
	if kindLen == 0 || kindLen > maxName {
		return header{}, errors.New("header is damaged: impossible length of its kind")
	}
	h.size = fixedHeader + int(kindLen)
	if len(b) < h.size {
		return header{}, fmt.Errorf("truncated: %d bytes, too few for a header", len(b))
	}
	h.kind = string(b[at+20 : h.size-4])
	if !matches(b[:h.size-4], b[h.size-4:]) {
		return header{}, errors.New("checksum of the header does not match")
	}
	return h, nil
}

func (h header) checkLength(got int) error {
	least := uint64(h.size) + trailerLen + uint64(h.sections)*uint64(fixedSection)
	switch {
	case h.total < least:
		return errors.New("header contradicts itself: sections do not fit into the length")
	case uint64(got) < h.total:
		return fmt.Errorf("truncated: %d of %d bytes", got, h.total)
	case uint64(got) > h.total:
		return fmt.Errorf("%d bytes after the end at %d", uint64(got)-h.total, h.total)
	}
	return nil
}

// decodeSection takes the next section off b and returns what follows it.
func (d *Decoder) decodeSection(b []byte) ([]byte, error) {
	place := fmt.Sprintf("section %d", len(d.names)+1)
	if len(b) < fixedSection {
		return nil, fmt.Errorf("%s is cut short: %d bytes left", place, len(b))
	}
	le := binary.LittleEndian
	typ, nameLen, size := valueType(b[0]), le.Uint32(b[1:]), le.Uint64(b[5:])
	room := uint64(len(b) - fixedSection)
	if nameLen == 0 || nameLen > maxName || uint64(nameLen) > room {
		return nil, fmt.Errorf("%s is damaged: impossible length of its name", place)
	}
	head := 13 + int(nameLen)
	if !matches(b[:head], b[head:]) {
		return nil, fmt.Errorf("checksum of the header of %s does not match", place)
	}
	name := string(b[13:head])
	place = fmt.Sprintf("section %q", name)
	if size > room-uint64(nameLen) {
		return nil, fmt.Errorf("%s is cut short: %d of %d bytes", place, room-uint64(nameLen), size)
	}
	payload := b[head+4 : head+4+int(size) : head+4+int(size)]
	rest := b[head+4+int(size):]
	if !matches(payload, rest) {
		return nil, fmt.Errorf("checksum of %s does not match", place)
	}
	if !typ.fits(size) {
		return nil, fmt.Errorf("%s: %d bytes are no %s (type %d)", place, size, typ, typ)
	}
	if _, twice := d.sections[name]; twice {
		return nil, fmt.Errorf("%s stands twice", place)
	}
	d.names = append(d.names, name)
	d.sections[name] = section{name: name, typ: typ, payload: payload}
	return rest[4:], nil
}

// matches reports whether check begins with the checksum of b.
func matches(b, check []byte) bool {
	return crc32.Checksum(b, castagnoli()) == binary.LittleEndian.Uint32(check)
}

// Version returns the version of the layout that the file was written in.
func (d *Decoder) Version() uint32 { return d.version }

// Names returns the names of the sections in their order in the file.
func (d *Decoder) Names() []string { return append([]string(nil), d.names...) }

// Has reports whether there is a section of that name; unlike reading it, asking is no error.
func (d *Decoder) Has(name string) bool {
	_, ok := d.sections[name]
	return ok
}

// Err returns the first error of the reading methods, nil when all found what they wanted.
func (d *Decoder) Err() error { return d.err }

// Float64s returns a copy of an array.
func (d *Decoder) Float64s(name string) []float64 {
	return array[float64](d, name, typeFloat64s)
}

// Int64s returns a copy of an array.
func (d *Decoder) Int64s(name string) []int64 { return array[int64](d, name, typeInt64s) }

// Uint64s returns a copy of an array.
func (d *Decoder) Uint64s(name string) []uint64 { return array[uint64](d, name, typeUint64s) }

// Uint32s returns a copy of an array.
func (d *Decoder) Uint32s(name string) []uint32 { return array[uint32](d, name, typeUint32s) }

// Bytes returns a copy of bytes.
func (d *Decoder) Bytes(name string) []byte {
	payload, ok := d.find(name, typeBytes)
	if !ok {
		return nil
	}
	return append([]byte{}, payload...)
}

// Float64 returns one number.
func (d *Decoder) Float64(name string) float64 {
	payload, ok := d.find(name, typeFloat64)
	if !ok {
		return 0
	}
	return math.Float64frombits(binary.LittleEndian.Uint64(payload))
}

// Int64 returns one whole number.
func (d *Decoder) Int64(name string) int64 {
	payload, ok := d.find(name, typeInt64)
	if !ok {
		return 0
	}
	return int64(binary.LittleEndian.Uint64(payload))
}

// String returns a text.
func (d *Decoder) String(name string) string {
	payload, _ := d.find(name, typeString)
	return string(payload)
}

func array[T number](d *Decoder, name string, typ valueType) []T {
	payload, ok := d.find(name, typ)
	if !ok {
		return nil
	}
	return fromBytes[T](payload)
}

// find returns the payload of a section and keeps the first failure.
func (d *Decoder) find(name string, want valueType) ([]byte, bool) {
	s, ok := d.sections[name]
	if !ok {
		d.fail(fmt.Errorf("section %q is missing", name))
		return nil, false
	}
	if s.typ != want {
		d.fail(fmt.Errorf("section %q holds %s, want %s", name, s.typ, want))
		return nil, false
	}
	return s.payload, true
}

func (d *Decoder) fail(err error) {
	if d.err == nil {
		d.err = err
	}
}
