package store

import (
	"archive/zip"
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func TestNPZRoundTrip(t *testing.T) {
	want := []Array{
		{Name: "z", Shape: []int{2, 1}, Data: []float64{1, 2}},
		{Name: "a b", Data: []float64{3}},
		{Name: "φ", Shape: []int{0}},
	}
	folder := t.TempDir()
	var files [2][]byte
	for i := range files {
		path := filepath.Join(folder, "a.npz")
		if err := WriteNPZ(path, want...); err != nil {
			t.Fatal(err)
		}
		got, err := ReadNPZ(path)
		if err != nil {
			t.Fatal(err)
		}
		same := slices.EqualFunc(got, want, func(a, b Array) bool {
			return a.Name == b.Name && slices.Equal(a.Shape, b.Shape) && sameBits(a.Data, b.Data)
		})
		if !same {
			t.Errorf("read %v; want %v", got, want)
		}
		if files[i], err = os.ReadFile(path); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(files[0], files[1]) {
		t.Error("the same arrays gave different bytes")
	}
}

func TestBadNPZ(t *testing.T) {
	archive := func(names []string, data []byte) []byte {
		var b bytes.Buffer
		z := zip.NewWriter(&b)
		for _, name := range names {
			w, err := z.Create(name)
			if err != nil {
				t.Fatal(err)
			}
			if _, err := w.Write(data); err != nil {
				t.Fatal(err)
			}
		}
		if err := z.Close(); err != nil {
			t.Fatal(err)
		}
		return b.Bytes()
	}
	good := unhex(t, numpy1)
	for _, c := range []struct {
		message string
		file    []byte
	}{
		{"not an NPZ file", nil},
		{"not an NPZ file", good},
		{`entry "a.txt"; want names that end in .npy`, archive([]string{"a.txt"}, good)},
		{`two arrays are named "a"`, archive([]string{"a.npy", "a.npy"}, good)},
		{`array "a": truncated`, archive([]string{"a.npy"}, good[:40])},
		{`array "a": trailing bytes`, archive([]string{"a.npy"}, append(good, 0))},
	} {
		path := filepath.Join(t.TempDir(), "bad.npz")
		writeFile(t, path, c.file)
		_, err := ReadNPZ(path)
		if err == nil || !strings.Contains(err.Error(), "bad.npz: ") || !strings.Contains(err.Error(), c.message) {
			t.Errorf("error %v; want one with the file and %q", err, c.message)
		}
	}
	for _, names := range [][]string{{""}, {"a/b"}, {"a", "a"}} {
		arrays := make([]Array, len(names))
		for i, name := range names {
			arrays[i] = Array{Name: name, Data: []float64{1}}
		}
		if err := WriteNPZ(filepath.Join(t.TempDir(), "x.npz"), arrays...); err == nil {
			t.Errorf("no error for the names %q", names)
		}
	}
}

func FuzzDecodeNPZ(f *testing.F) {
	path := filepath.Join(f.TempDir(), "a.npz")
	if err := WriteHistoryNPZ(path, ring(f)); err != nil {
		f.Fatal(err)
	}
	good, err := os.ReadFile(path)
	if err != nil {
		f.Fatal(err)
	}
	f.Add(good)
	f.Add(good[:len(good)-10])
	f.Add([]byte("PK\x05\x06" + strings.Repeat("\x00", 18))) // an empty archive
	f.Fuzz(func(t *testing.T, file []byte) {
		arrays, err := decodeNPZ(bytes.NewReader(file), int64(len(file)))
		if err != nil {
			return
		}
		if h, err := wholeHistory(arrays); err == nil && len(h.Data) != h.Block.Slices()*h.Components*h.Block.Sites() {
			t.Fatalf("history of %d values on a block of %d × %d", len(h.Data), h.Block.Slices(), h.Block.Sites())
		}
	})
}
