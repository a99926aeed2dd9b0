package store

import (
	"bytes"
	"encoding/binary"
	"encoding/hex"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/iotest"
)

// Bytes made by NumPy 1.24.2:
//
//	a = numpy.array([[1.0, -2.5, numpy.inf], [0.1, -0.0, 5e-324]])
//	b = io.BytesIO(); numpy.save(b, a); print(b.getvalue().hex())
//	numpy.lib.format.write_array(b, numpy.array([3.0]), version=(2, 0)), and (3, 0)
var (
	numpy1 = "934e554d5059010076007b276465736372273a20273c6638272c2027666f727472616e5f6f72646572273a2046616c73652c20277368617065273a2028322c2033292c207d" + strings.Repeat("20", 58) + "0a" +
		"000000000000f03f00000000000004c0000000000000f07f9a9999999999b93f00000000000000800100000000000000"
	numpy2 = "934e554d5059020074000000" + numpyTail
	numpy3 = "934e554d5059030074000000" + numpyTail

	numpyTail = "7b276465736372273a20273c6638272c2027666f727472616e5f6f72646572273a2046616c73652c20277368617065273a2028312c292c207d" + strings.Repeat("20", 58) + "0a0000000000000840"
)

func unhex(t testing.TB, s string) []byte {
	t.Helper()
	b, err := hex.DecodeString(s)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// sameBits reports whether a and b are equal as bit patterns.
func sameBits(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) })
}

func TestNumPyBytes(t *testing.T) {
	want := Array{Shape: []int{2, 3}, Data: []float64{1, -2.5, math.Inf(1), 0.1, math.Copysign(0, -1), 5e-324}}
	got, err := DecodeNPY(bytes.NewReader(unhex(t, numpy1)))
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(got.Shape, want.Shape) || !sameBits(got.Data, want.Data) {
		t.Errorf("read %v; want %v", got, want)
	}
	var b bytes.Buffer
	if err := EncodeNPY(&b, want); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(b.Bytes(), unhex(t, numpy1)) {
		t.Errorf("wrote\n%x\nNumPy writes\n%s", b.Bytes(), numpy1)
	}
	for name, file := range map[string]string{"2.0": numpy2, "3.0": numpy3} {
		got, err := DecodeNPY(bytes.NewReader(unhex(t, file)))
		if err != nil || !slices.Equal(got.Shape, []int{1}) || !slices.Equal(got.Data, []float64{3}) {
			t.Errorf("version %s: read %v, %v; want [3]", name, got, err)
		}
	}
}

func TestNPYRoundTrip(t *testing.T) {
	long := make([]float64, 3*chunk+5)
	for i := range long {
		long[i] = math.Sin(float64(i))
	}
	odd := math.Float64frombits(0x7ff8dead0000beef) // a NaN with a payload
	for _, want := range []Array{
		{Data: []float64{4}}, // a scalar
		{Shape: []int{0}},
		{Shape: []int{3, 0, 2}},
		{Shape: []int{2, 1, 2}, Data: []float64{odd, math.Inf(-1), math.MaxFloat64, -0.1}},
		{Shape: []int{len(long)}, Data: long},
	} {
		path := filepath.Join(t.TempDir(), "a.npy")
		if err := WriteNPY(path, want); err != nil {
			t.Fatal(err)
		}
		got, err := ReadNPY(path)
		if err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(got.Shape, want.Shape) || !sameBits(got.Data, want.Data) {
			t.Errorf("shape %v came back as %v with other bits or shape", want.Shape, got.Shape)
		}
	}
}

// npy returns an NPY file of version 1.0 with the header as given.
func npy(dict string, data ...byte) []byte {
	b := append([]byte(magic), 1, 0)
	b = binary.LittleEndian.AppendUint16(b, uint16(len(dict)))
	return append(append(b, dict...), data...)
}

// badNPY holds files that must be refused, with a word of the message.
var badNPY = []struct {
	name, message string
	file          []byte
}{
	{"empty", "only 0 bytes", nil},
	{"a few bytes", "only 3 bytes", []byte("\x93NU")},
	{"magic", "want an NPY file", []byte("PK\x03\x04 something else")},
	{"version 1.1", "version 1.1; want 1.0, 2.0 or 3.0", []byte(magic + "\x01\x01\x10\x00")},
	{"version 4.0", "version 4.0", []byte(magic + "\x04\x00\x10\x00\x00\x00")},
	{"no length", "length of the NPY header", []byte(magic + "\x01\x00\x10")},
	{"huge header", "header of 4294967295 bytes; want at most", []byte(magic + "\x02\x00\xff\xff\xff\xff")},
	{"short header", "truncated after 3 bytes of an NPY header of 16", []byte(magic + "\x01\x00\x10\x00{'d")},
	{"no newline", "newline", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (), }")},
	{"no dictionary", `want '{'`, npy("[]\n")},
	{"int64", "dtype '<i8'; want '<f8'", npy("{'descr': '<i8', 'fortran_order': False, 'shape': (1,), }\n", make([]byte, 8)...)},
	{"float32", "dtype '<f4'", npy("{'descr': '<f4', 'fortran_order': False, 'shape': (2,), }\n", make([]byte, 8)...)},
	{"big-endian", "dtype '>f8'", npy("{'descr': '>f8', 'fortran_order': False, 'shape': (1,), }\n", make([]byte, 8)...)},
	{"records", "array of records", npy("{'descr': [('a', '<f8')], 'fortran_order': False, 'shape': (1,), }\n", make([]byte, 8)...)},
	{"Fortran order", "Fortran order; want C order", npy("{'descr': '<f8', 'fortran_order': True, 'shape': (1, 1), }\n", make([]byte, 8)...)},
	{"strange order", `fortran_order "0, 'shape': "; want False`, npy("{'descr': '<f8', 'fortran_order': 0, 'shape': (1,), }\n", make([]byte, 8)...)},
	{"negative length", "whole numbers", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (-1,), }\n")},
	{"length beyond int", "fit in an int", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (99999999999999999999,), }\n")},
	{"shape overflows", "cannot be counted", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (4294967296, 4294967296), }\n")},
	{"shape without data", "truncated after 0 bytes", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (1000000000000000, 1), }\n")},
	{"too many dimensions", "33 dimensions", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (" + strings.Repeat("1, ", 33) + "), }\n")},
	{"number, not tuple", "want a tuple, (1,)", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (1), }\n", make([]byte, 8)...)},
	{"truncated data", "truncated after 15 bytes; want 16", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (2,), }\n", make([]byte, 15)...)},
	{"trailing bytes", "trailing bytes", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (2,), }\n", make([]byte, 17)...)},
	{"key twice", `"descr" twice`, npy("{'descr': '<f8', 'descr': '<f8', 'fortran_order': False, 'shape': (), }\n", make([]byte, 8)...)},
	{"unknown key", `unknown key "order"`, npy("{'descr': '<f8', 'order': False, 'shape': (), }\n", make([]byte, 8)...)},
	{"missing key", `lacks the key "shape"`, npy("{'descr': '<f8', 'fortran_order': False}\n", make([]byte, 8)...)},
	{"string without end", "string without end", npy("{'descr: \n")},
	{"text after dictionary", "goes on", npy("{'descr': '<f8', 'fortran_order': False, 'shape': (), } exit()\n", make([]byte, 8)...)},
}

func TestBadNPY(t *testing.T) {
	for _, c := range badNPY {
		_, err := DecodeNPY(bytes.NewReader(c.file))
		if err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%s: error %v; want one with %q", c.name, err, c.message)
		}
	}
	if _, err := DecodeNPY(iotest.ErrReader(iotest.ErrTimeout)); err == nil {
		t.Error("no error from a reader that fails")
	}
}

// A file on disk is checked against its size before memory is set aside, so the
// message tells both numbers.
func TestBadNPYFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "short.npy")
	writeFile(t, path, npy("{'descr': '<f8', 'fortran_order': False, 'shape': (100000000000, 3), }\n", 1, 2, 3))
	_, err := ReadNPY(path)
	if err == nil || !strings.Contains(err.Error(), "short.npy: 3 bytes of data for the shape [100000000000 3]; want 2400000000000") {
		t.Errorf("error %v; want the file, 3 bytes and the number wanted", err)
	}
}

func TestWriteBadArray(t *testing.T) {
	for _, a := range []Array{
		{Shape: []int{2, 2}, Data: []float64{1, 2, 3}},
		{Shape: []int{-1, -1}, Data: []float64{1}},
		{Shape: make([]int, 33)},
	} {
		if err := EncodeNPY(&bytes.Buffer{}, a); err == nil {
			t.Errorf("no error for shape %v with %d values", a.Shape, len(a.Data))
		}
	}
}

func FuzzDecodeNPY(f *testing.F) {
	for _, c := range badNPY {
		f.Add(c.file)
	}
	for _, good := range []string{numpy1, numpy2, numpy3} {
		f.Add(unhex(f, good))
	}
	f.Fuzz(func(t *testing.T, file []byte) {
		a, err := DecodeNPY(bytes.NewReader(file))
		if err != nil {
			return
		}
		// What was accepted can be written and read back to the same bits.
		var b bytes.Buffer
		if err := EncodeNPY(&b, a); err != nil {
			t.Fatalf("read shape %v but cannot write it: %v", a.Shape, err)
		}
		again, err := DecodeNPY(&b)
		if err != nil || !slices.Equal(a.Shape, again.Shape) || !sameBits(a.Data, again.Data) {
			t.Fatalf("shape %v came back as %v, %v", a.Shape, again.Shape, err)
		}
	})
}

func BenchmarkEncodeNPY(b *testing.B) {
	a := Array{Shape: []int{1000, 2000}, Data: make([]float64, 2_000_000)}
	b.SetBytes(int64(8 * len(a.Data)))
	for b.Loop() {
		if err := EncodeNPY(discard{}, a); err != nil {
			b.Fatal(err)
		}
	}
}

type discard struct{}

func (discard) Write(p []byte) (int, error) { return len(p), nil }
