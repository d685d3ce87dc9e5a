package codec

import "hash/crc32"

const (
	// magic opens every file; its last byte is the number of the container format itself.
	magic = "ionfall\x01"
	// fixedHeader is the length of the header without the text of its kind.
	fixedHeader = len(magic) + 4 + 4 + 8 + 4 + 4
	// fixedSection is the length of a section without its name and its payload.
	fixedSection = 1 + 4 + 8 + 4 + 4
	// trailerLen is the length of the check of the whole file.
	trailerLen = 4
	// maxName bounds the length of kinds and names: they are identifiers, not data.
	maxName = 1 << 10
)

// valueType says what the payload of a section is. The numbers are in files: never reuse one.
type valueType uint8

const (
	typeFloat64s valueType = 1
	typeInt64s   valueType = 2
	typeUint64s  valueType = 3
	typeUint32s  valueType = 4
	typeBytes    valueType = 5
	typeFloat64  valueType = 6
	typeInt64    valueType = 7
	typeString   valueType = 8
)

// String names the type as messages do.
func (t valueType) String() string {
	switch t {
	case typeFloat64s:
		return "float64 array"
	case typeInt64s:
		return "int64 array"
	case typeUint64s:
		return "uint64 array"
	case typeUint32s:
		return "uint32 array"
	case typeBytes:
		return "bytes"
	case typeFloat64:
		return "float64"
	case typeInt64:
		return "int64"
	case typeString:
		return "string"
	}
	return "unknown type"
}

// size returns the bytes of one element, 0 for a type that does not exist.
func (t valueType) size() int {
	switch t {
	case typeFloat64s, typeInt64s, typeUint64s, typeFloat64, typeInt64:
		return 8
	case typeUint32s:
		return 4
	case typeBytes, typeString:
		return 1
	}
	return 0
}

// fits reports whether a payload of n bytes is a whole value of the type.
func (t valueType) fits(n uint64) bool {
	switch t {
	case typeFloat64, typeInt64:
		return n == 8
	}
	return t.size() > 0 && n%uint64(t.size()) == 0
}

// castagnoli returns the table of CRC-32C; the library makes it once and uses the processor's own
// instruction for it.
func castagnoli() *crc32.Table { return crc32.MakeTable(crc32.Castagnoli) }
