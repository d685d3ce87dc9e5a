package codec

import (
	"encoding/binary"
	"unsafe"
)

// number is an element of an array section.
type number interface {
	float64 | int64 | uint64 | uint32
}

// nativeLittle reports whether memory already holds numbers as the file does.
func nativeLittle() bool { return binary.NativeEndian.Uint16([]byte{1, 0}) == 1 }

// toBytes returns the little-endian bytes of v: its own memory where the machine agrees with the
// file, else a converted copy.
func toBytes[T number](v []T) []byte {
	b := memory(v)
	if nativeLittle() {
		return b
	}
	return reversed(b, elementSize[T]())
}

// fromBytes returns a fresh array of the numbers in b, whose length is a multiple of their size.
func fromBytes[T number](b []byte) []T {
	size := elementSize[T]()
	v := make([]T, len(b)/size)
	if !nativeLittle() {
		b = reversed(b, size)
	}
	copy(memory(v), b)
	return v
}

func elementSize[T number]() int {
	var zero T
	return int(unsafe.Sizeof(zero))
}

// memory returns the bytes that hold v, sharing its memory.
func memory[T number](v []T) []byte {
	if len(v) == 0 {
		return nil
	}
	return unsafe.Slice((*byte)(unsafe.Pointer(unsafe.SliceData(v))), len(v)*elementSize[T]())
}

// reversed returns a copy of b in which the bytes of each element stand in the opposite order.
func reversed(b []byte, size int) []byte {
	out := make([]byte, len(b))
	for i := 0; i < len(b); i += size {
		for j := range size {
			out[i+j] = b[i+size-1-j]
		}
	}
	return out
}
