package store

import (
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
)

// A Parquet file has checksums for its pages, but none for what describes them, and its decoder
// can take all memory or panic when a flipped bit misleads it. So a table is sealed: in the gap
// that the format allows between the last page and the footer stands the CRC-32C of all the rest.
// Other readers start from the end of the file and never see it.
//
//	pages, indexes | sealMagic, crc u32 | footer, its length u32, "PAR1"
const (
	sealMagic = "ionfall:"
	sealLen   = len(sealMagic) + 4
	tailLen   = 4 + 4
)

// writeSealed writes the Parquet file in b with its seal.
func writeSealed(w io.Writer, b []byte) error {
	if len(b) < tailLen {
		return fmt.Errorf("table of %d bytes has no footer", len(b))
	}
	footer := int(binary.LittleEndian.Uint32(b[len(b)-tailLen:])) + tailLen
	if footer > len(b) {
		return fmt.Errorf("footer of %d bytes in a table of %d", footer, len(b))
	}
	body, rest := b[:len(b)-footer], b[len(b)-footer:]
	castagnoli := crc32.MakeTable(crc32.Castagnoli)
	sum := crc32.Update(crc32.Checksum(body, castagnoli), castagnoli, rest)
	seal := binary.LittleEndian.AppendUint32([]byte(sealMagic), sum)
	for _, part := range [][]byte{body, seal, rest} {
		if _, err := w.Write(part); err != nil {
			return err
		}
	}
	return nil
}

// verifySeal checks a file of the given size against its seal.
func verifySeal(r io.ReaderAt, size int64) error {
	tail := make([]byte, tailLen)
	if size < int64(tailLen+sealLen) {
		return fmt.Errorf("not a whole table: %d bytes", size)
	}
	if _, err := r.ReadAt(tail, size-tailLen); err != nil {
		return err
	}
	if string(tail[4:]) != "PAR1" {
		return errors.New("not a whole table: its end is not that of a Parquet file")
	}
	at := size - int64(sealLen+tailLen) - int64(binary.LittleEndian.Uint32(tail))
	seal := make([]byte, sealLen)
	if at < 0 {
		return errors.New("not a whole table: its footer is longer than the file")
	}
	if _, err := r.ReadAt(seal, at); err != nil {
		return err
	}
	if string(seal[:len(sealMagic)]) != sealMagic {
		return errors.New("not a table of this program, or damaged: no seal before its footer")
	}
	sum := crc32.New(crc32.MakeTable(crc32.Castagnoli))
	after := at + int64(sealLen)
	for _, part := range []*io.SectionReader{
		io.NewSectionReader(r, 0, at),
		io.NewSectionReader(r, after, size-after),
	} {
		if _, err := io.Copy(sum, part); err != nil {
			return err
		}
	}
	if sum.Sum32() != binary.LittleEndian.Uint32(seal[len(sealMagic):]) {
		return errors.New("checksum of the file does not match: it is damaged")
	}
	return nil
}
