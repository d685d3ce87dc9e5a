// Package codec is the binary form of a checkpoint: named, typed arrays in one checksummed file.
//
// A file is a header, then one section per array, then a trailer; every number is little endian.
//
//	header   magic [8]byte, version u32, sections u32, total u64, kindLen u32, kind, crc u32
//	section  type u8, nameLen u32, payloadLen u64, name, crc u32, payload, crc u32
//	trailer  crc u32 of every byte before it
//
// All checks are CRC-32C (Castagnoli). The header says how long the whole file is, so a truncated
// file is told from a damaged one. kind names what the file holds and version its layout: a reader
// refuses a foreign kind and a version newer than it knows. The payload is the array as it lies in
// memory, uncompressed: particle data do not compress, and a copy is the fastest way there is.
//
//	enc := codec.NewEncoder("plasma", 1)
//	enc.Float64s("electron.x", x)
//	enc.Int64("step", n)
//	_, err := enc.WriteTo(w)
//
//	dec, err := codec.Decode("plasma", 1, b)
//	x := dec.Float64s("electron.x")
//	n := dec.Int64("step")
//	err = dec.Err() // the first section that was missing or of another type
package codec
