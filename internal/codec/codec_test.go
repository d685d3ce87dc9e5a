package codec

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"slices"
	"strings"
	"testing"
)

const kind = "plasma"

// small returns a file with a section of every type, short enough to damage it everywhere.
func small(t testing.TB) []byte {
	t.Helper()
	e := NewEncoder(kind, 3)
	e.Float64s("electron.x", []float64{1.5, math.Copysign(0, -1), math.Inf(1), 0x1p-1074})
	e.Int64s("counts", []int64{-1, math.MaxInt64, math.MinInt64})
	e.Uint64s("keys", []uint64{math.MaxUint64, 7})
	e.Uint32s("cells", []uint32{1, math.MaxUint32, 3})
	e.Bytes("note", []byte{0, 255, 1})
	e.Float64("weight", math.Pi)
	e.Int64("step", -42)
	e.String("title", "argon, 4 cm")
	e.Float64s("empty", nil)
	return encoded(t, e)
}

func encoded(t testing.TB, e *Encoder) []byte {
	t.Helper()
	var b bytes.Buffer
	n, err := e.WriteTo(&b)
	if err != nil {
		t.Fatal(err)
	}
	if n != int64(b.Len()) || n != e.Size() {
		t.Fatalf("WriteTo says %d, Size %d, written %d", n, e.Size(), b.Len())
	}
	return b.Bytes()
}

func TestRoundTrip(t *testing.T) {
	d, err := Decode(kind, 3, small(t))
	if err != nil {
		t.Fatal(err)
	}
	names := []string{
		"electron.x", "counts", "keys", "cells", "note", "weight", "step", "title",
		"empty",
	}
	if !slices.Equal(d.Names(), names) || d.Version() != 3 {
		t.Errorf("names %q, version %d", d.Names(), d.Version())
	}
	x := d.Float64s("electron.x")
	want := []float64{1.5, math.Copysign(0, -1), math.Inf(1), 0x1p-1074}
	if !slices.Equal(x, want) || !math.Signbit(x[1]) {
		t.Errorf("electron.x: %v, want %v", x, want)
	}
	if v := d.Int64s("counts"); !slices.Equal(v, []int64{-1, math.MaxInt64, math.MinInt64}) {
		t.Errorf("counts: %v", v)
	}
	if v := d.Uint64s("keys"); !slices.Equal(v, []uint64{math.MaxUint64, 7}) {
		t.Errorf("keys: %v", v)
	}
	if v := d.Uint32s("cells"); !slices.Equal(v, []uint32{1, math.MaxUint32, 3}) {
		t.Errorf("cells: %v", v)
	}
	if v := d.Bytes("note"); !bytes.Equal(v, []byte{0, 255, 1}) {
		t.Errorf("note: %v", v)
	}
	if v := d.Float64("weight"); v != math.Pi {
		t.Errorf("weight: %v", v)
	}
	if v := d.Int64("step"); v != -42 {
		t.Errorf("step: %v", v)
	}
	if v := d.String("title"); v != "argon, 4 cm" {
		t.Errorf("title: %q", v)
	}
	if v := d.Float64s("empty"); v == nil || len(v) != 0 {
		t.Errorf("empty: %v, want an empty array", v)
	}
	if d.Err() != nil {
		t.Error(d.Err())
	}
}

// TestNaNBits: the bits of a NaN are kept, as those of any other number.
func TestNaNBits(t *testing.T) {
	const bits = 0x7ff8_0000_dead_beef
	e := NewEncoder(kind, 1)
	e.Float64s("x", []float64{math.Float64frombits(bits)})
	d, err := Decode(kind, 1, encoded(t, e))
	if err != nil {
		t.Fatal(err)
	}
	if got := math.Float64bits(d.Float64s("x")[0]); got != bits {
		t.Errorf("got %x, want %x", got, uint64(bits))
	}
}

// TestReadsAreCopies: changing what was read changes neither the file nor the next read.
func TestReadsAreCopies(t *testing.T) {
	b := small(t)
	before := slices.Clone(b)
	d, err := Decode(kind, 3, b)
	if err != nil {
		t.Fatal(err)
	}
	d.Float64s("electron.x")[0] = 9
	d.Bytes("note")[0] = 9
	d.Names()[0] = "changed"
	if !bytes.Equal(b, before) || d.Float64s("electron.x")[0] != 1.5 ||
		d.Names()[0] != "electron.x" {
		t.Error("a read shares memory with the decoder")
	}
}

// TestKeepsReferences: the arrays are not copied, so what counts is their state in WriteTo.
func TestKeepsReferences(t *testing.T) {
	x := make([]float64, 1<<16)
	e := NewEncoder(kind, 1)
	e.Float64s("x", x)
	x[7] = 5
	d, err := Decode(kind, 1, encoded(t, e))
	if err != nil {
		t.Fatal(err)
	}
	if d.Float64s("x")[7] != 5 {
		t.Error("the encoder made a copy")
	}
	allocated := testing.Benchmark(func(b *testing.B) {
		for b.Loop() {
			if _, err := e.WriteTo(io.Discard); err != nil {
				b.Fatal(err)
			}
		}
	}).AllocedBytesPerOp()
	if allocated > 4096 {
		t.Errorf("WriteTo allocates %d bytes for an array of %d", allocated, 8*len(x))
	}
}

// TestTruncation: a file cut at any byte is refused, and said to be truncated.
func TestTruncation(t *testing.T) {
	b := small(t)
	for n := range b {
		_, err := Decode(kind, 3, b[:n])
		if err == nil || !strings.HasPrefix(err.Error(), "truncated: ") {
			t.Fatalf("%d of %d bytes: %v", n, len(b), err)
		}
	}
	_, err := Decode(kind, 3, b[:100])
	if want := "truncated: 100 of 394 bytes"; err.Error() != want {
		t.Errorf("got %q, want %q", err, want)
	}
}

// TestBitFlips: a CRC detects every single-bit error, so no flip may pass.
func TestBitFlips(t *testing.T) {
	b := small(t)
	for i := range 8 * len(b) {
		b[i/8] ^= 1 << (i % 8)
		if _, err := Decode(kind, 3, b); err == nil {
			t.Errorf("bit %d of byte %d flipped: not detected", i%8, i/8)
		}
		b[i/8] ^= 1 << (i % 8)
	}
}

func TestRefusals(t *testing.T) {
	good := small(t)
	damaged := func(change func(b []byte) []byte) []byte { return change(slices.Clone(good)) }
	at := bytes.Index(good, []byte("electron.x")) + len("electron.x") + 4
	for _, c := range []struct {
		name string
		kind string
		max  uint32
		b    []byte
		want string
	}{
		{"empty", kind, 3, nil, "truncated: 0 bytes, too few for a header"},
		{
			"foreign", kind, 3, []byte("PAR1 something else entirely"),
			"not a file of this program: its first bytes are foreign",
		},
		{"kind", "scan", 3, good, `holds "plasma", want "scan"`},
		{
			"newer", kind, 2, good,
			`written by a newer version: layout 3 of "plasma", this program reads up to 2`,
		},
		{
			"longer", kind, 3, damaged(func(b []byte) []byte { return append(b, 1, 2) }),
			"2 bytes after the end at 394",
		},
		{
			"payload", kind, 3, damaged(func(b []byte) []byte { b[at] ^= 8; return b }),
			`checksum of section "electron.x" does not match`,
		},
		{
			"header", kind, 3, damaged(func(b []byte) []byte { b[9] ^= 8; return b }),
			"checksum of the header does not match",
		},
		{
			"trailer", kind, 3, damaged(func(b []byte) []byte { b[len(b)-1] ^= 8; return b }),
			"checksum of the whole file does not match",
		},
	} {
		_, err := Decode(c.kind, c.max, c.b)
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: got %v, want %s", c.name, err, c.want)
		}
	}
}

// TestForgedFiles: files whose checksums are right but which contradict themselves.
func TestForgedFiles(t *testing.T) {
	forge := func(e *Encoder) []byte { return encoded(t, e) }
	twice := NewEncoder(kind, 1)
	twice.Int64("n", 1)
	twice.sections = append(twice.sections, twice.sections[0])
	ragged := NewEncoder(kind, 1)
	ragged.add("x", typeFloat64s, make([]byte, 12))
	unknown := NewEncoder(kind, 1)
	unknown.add("x", 99, make([]byte, 8))
	overfull := NewEncoder(kind, 1)
	many := forge(overfull)
	binary.LittleEndian.PutUint32(many[12:], math.MaxUint32)
	copy(many[len(many)-8:], sum(many[:len(many)-8]))
	for name, c := range map[string]struct {
		b    []byte
		want string
	}{
		"twice":    {forge(twice), `section "n" stands twice`},
		"ragged":   {forge(ragged), `section "x": 12 bytes are no float64 array (type 1)`},
		"unknown":  {forge(unknown), `section "x": 8 bytes are no unknown type (type 99)`},
		"sections": {many, "header contradicts itself: sections do not fit into the length"},
	} {
		if _, err := Decode(kind, 1, c.b); err == nil || err.Error() != c.want {
			t.Errorf("%s: got %v, want %s", name, err, c.want)
		}
	}
}

func TestFirstErrorIsKept(t *testing.T) {
	d, err := Decode(kind, 3, small(t))
	if err != nil {
		t.Fatal(err)
	}
	if d.Has("electron.y") || !d.Has("step") || d.Err() != nil {
		t.Errorf("Has: wrong or an error: %v", d.Err())
	}
	if v := d.Float64s("step"); v != nil {
		t.Errorf("got %v from a section of another type", v)
	}
	if v := d.Float64s("electron.y"); v != nil {
		t.Errorf("got %v from a missing section", v)
	}
	if v := d.String("note"); v != "" {
		t.Errorf("got %q from a section of another type", v)
	}
	want := `section "step" holds int64, want float64 array`
	if d.Err() == nil || d.Err().Error() != want {
		t.Errorf("got %v, want %s", d.Err(), want)
	}
	if d, err = Decode(kind, 3, small(t)); err != nil {
		t.Fatal(err)
	}
	_ = d.Int64("gone")
	if want := `section "gone" is missing`; d.Err() == nil || d.Err().Error() != want {
		t.Errorf("got %v, want %s", d.Err(), want)
	}
}

func TestProgrammerErrorsPanic(t *testing.T) {
	for name, f := range map[string]func(){
		"twice":     func() { e := NewEncoder(kind, 1); e.Int64("n", 1); e.Float64("n", 1) },
		"no name":   func() { NewEncoder(kind, 1).Int64("", 1) },
		"long name": func() { NewEncoder(kind, 1).Int64(strings.Repeat("n", maxName+1), 1) },
		"no kind":   func() { NewEncoder("", 1) },
	} {
		func() {
			defer func() {
				if s, ok := recover().(string); !ok || !strings.HasPrefix(s, "codec: ") {
					t.Errorf("%s: panic %q, want one that starts with codec:", name, s)
				}
			}()
			f()
		}()
	}
}

// failingWriter takes left bytes and then fails, or keeps silent about what it did not take.
type failingWriter struct {
	left   int
	silent bool
}

var errFull = errors.New("full")

func (w *failingWriter) Write(b []byte) (int, error) {
	if len(b) <= w.left {
		w.left -= len(b)
		return len(b), nil
	}
	n := w.left
	w.left = 0
	if w.silent {
		return n, nil
	}
	return n, errFull
}

// TestWriteErrors: a failure at any byte comes back, with the bytes that got through.
func TestWriteErrors(t *testing.T) {
	e := NewEncoder(kind, 1)
	e.Float64s("x", []float64{1, 2})
	e.String("s", "text")
	for n := range int(e.Size()) {
		got, err := e.WriteTo(&failingWriter{left: n})
		if !errors.Is(err, errFull) || got != int64(n) {
			t.Fatalf("full after %d: wrote %d, %v", n, got, err)
		}
		_, err = e.WriteTo(&failingWriter{left: n, silent: true})
		if !errors.Is(err, io.ErrShortWrite) {
			t.Fatalf("short write at %d: %v", n, err)
		}
	}
}

// TestReversed: the form for big-endian machines, which this one may not be.
func TestReversed(t *testing.T) {
	v := []uint32{0x01020304, 0xa0b0c0d0}
	want := []byte{1, 2, 3, 4, 0xa0, 0xb0, 0xc0, 0xd0}
	if nativeLittle() {
		if got := reversed(toBytes(v), 4); !bytes.Equal(got, want) {
			t.Errorf("got %x, want %x", got, want)
		}
	}
	if got := reversed(reversed(want, 8), 8); !bytes.Equal(got, want) {
		t.Errorf("twice reversed: %x", got)
	}
}

// FuzzDecode: no input panics, and what decodes encodes to the same bytes again.
func FuzzDecode(f *testing.F) {
	f.Add(small(f))
	f.Add([]byte(magic))
	f.Add(encoded(f, NewEncoder(kind, 1)))
	f.Fuzz(func(t *testing.T, b []byte) {
		repaired(b)
		d, err := Decode(kind, 3, b)
		if err != nil {
			return
		}
		e := NewEncoder(kind, d.Version())
		for _, name := range d.Names() {
			s := d.sections[name]
			e.add(name, s.typ, s.payload)
		}
		if !bytes.Equal(encoded(t, e), b) {
			t.Error("decoded and encoded again, the file differs")
		}
	})
}

// repaired corrects the checks of header and first section, so that mutations get behind them.
func repaired(b []byte) {
	if len(b) < fixedHeader+len(kind)+fixedSection+trailerLen {
		return
	}
	copy(b, magic)
	end := fixedHeader + len(kind) - 4
	copy(b[end:], sum(b[:end]))
	s := b[end+4:]
	nameLen, size := binary.LittleEndian.Uint32(s[1:]), binary.LittleEndian.Uint64(s[5:])
	head := 13 + uint64(nameLen)
	if room := uint64(len(s)); size <= room && head+size+8+trailerLen <= room {
		copy(s[head:], sum(s[:head]))
		copy(s[head+4+size:], sum(s[head+4:head+4+size]))
	}
	copy(b[len(b)-trailerLen:], sum(b[:len(b)-trailerLen]))
}

func BenchmarkWrite(b *testing.B) {
	e := NewEncoder(kind, 1)
	e.Float64s("x", make([]float64, 4<<20))
	b.SetBytes(e.Size())
	for b.Loop() {
		if _, err := e.WriteTo(io.Discard); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkRead(b *testing.B) {
	e := NewEncoder(kind, 1)
	e.Float64s("x", make([]float64, 4<<20))
	file := encoded(b, e)
	b.SetBytes(e.Size())
	for b.Loop() {
		d, err := Decode(kind, 1, file)
		if err != nil {
			b.Fatal(err)
		}
		if len(d.Float64s("x")) != 4<<20 {
			b.Fatal("short")
		}
	}
}
