package store

import (
	"bytes"
	"math"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func TestTableRoundTrip(t *testing.T) {
	want := Table{
		Header: []string{"t", "energy, total", `the "drift"`, " φ "},
		Rows: [][]float64{
			{0, 0.1, 1.0 / 3, math.Pi},
			{5e-324, math.MaxFloat64, math.Inf(-1), math.NaN()},
			{math.Copysign(0, -1), 1e22, math.Nextafter(1, 2), math.Inf(1)},
		},
	}
	path := filepath.Join(t.TempDir(), "t.csv")
	if err := WriteTable(path, want); err != nil {
		t.Fatal(err)
	}
	got, err := ReadTable(path)
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(got.Header, want.Header) || !slices.EqualFunc(got.Rows, want.Rows, sameBits) {
		t.Errorf("read %v; want %v", got, want)
	}
	if drift, ok := got.Column(`the "drift"`); !ok || !slices.Equal(drift, []float64{1.0 / 3, math.Inf(-1), math.Nextafter(1, 2)}) {
		t.Errorf("column %v, %v", drift, ok)
	}
	if _, ok := got.Column("none"); ok {
		t.Error("a column that is not there was found")
	}
}

func TestBadTable(t *testing.T) {
	for _, c := range []struct{ text, message string }{
		{"", "empty file"},
		{"a,b\n1,2\n3,x4\n", `line 3, column 2 (b): "x4"`},
		{"a,b\n1,2\n\n\n3,\n", `line 5, column 2 (b): ""`},
		{"a\n1e999\n", "fits in a float64"},
		{"a,b\n1\n", "line 2"},
		{"a,b\n1,\"2\n", "line"},
		{"a,a\n1,2\n", `line 1: two columns are named "a"`},
		{"a,\n1,2\n", `column 2 is named ""`},
	} {
		_, err := DecodeTable(strings.NewReader(c.text))
		if err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%q: error %v; want one with %q", c.text, err, c.message)
		}
	}
	for _, bad := range []Table{
		{},
		{Header: []string{"a\nb"}},
		{Header: []string{"a"}, Rows: [][]float64{{1}, {}}},
	} {
		if err := EncodeTable(&bytes.Buffer{}, bad); err == nil {
			t.Errorf("no error for %v", bad)
		}
	}
}

func FuzzDecodeTable(f *testing.F) {
	f.Add("a,b\n1,2\n")
	f.Add("\"a\"\"\",b\n-0x1p-2,nan\n")
	f.Fuzz(func(t *testing.T, text string) {
		table, err := DecodeTable(strings.NewReader(text))
		if err != nil {
			return
		}
		var b bytes.Buffer
		if err := EncodeTable(&b, table); err != nil {
			t.Fatal(err)
		}
		again, err := DecodeTable(&b)
		if err != nil || !slices.Equal(table.Header, again.Header) || !slices.EqualFunc(table.Rows, again.Rows, sameBits) {
			t.Fatalf("%q became %v, %v", text, again, err)
		}
	})
}
