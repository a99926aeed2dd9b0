package store

import (
	"archive/zip"
	"fmt"
	"io"
	"os"
	"strings"
)

// WriteNPZ writes named arrays to an NPZ file, uncompressed and in the order
// given. The names must be different, not empty, and free of slashes. The same
// arrays give the same bytes.
func WriteNPZ(path string, arrays ...Array) error {
	return Replace(path, func(w io.Writer) error {
		z := zip.NewWriter(w)
		seen := map[string]bool{}
		for i, a := range arrays {
			switch {
			case a.Name == "" || strings.ContainsAny(a.Name, `/\`):
				return fmt.Errorf("array %d is named %q; want a name without slashes", i, a.Name)
			case seen[a.Name]:
				return fmt.Errorf("two arrays are named %q", a.Name)
			}
			seen[a.Name] = true
			f, err := z.CreateHeader(&zip.FileHeader{Name: a.Name + ".npy", Method: zip.Store})
			if err != nil {
				return err
			}
			if err := encodeNPY(f, a); err != nil {
				return fmt.Errorf("array %q: %w", a.Name, err)
			}
		}
		return z.Close()
	})
}

// ReadNPZ reads all arrays of an NPZ file, stored or deflated, in the order of
// the file.
func ReadNPZ(path string) ([]Array, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("store: %w", err)
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, fmt.Errorf("store: %w", err)
	}
	arrays, err := decodeNPZ(f, info.Size())
	if err != nil {
		return nil, fmt.Errorf("store: %s: %w", path, err)
	}
	return arrays, nil
}

func decodeNPZ(r io.ReaderAt, size int64) ([]Array, error) {
	z, err := zip.NewReader(r, size)
	if err != nil {
		return nil, fmt.Errorf("not an NPZ file: %w", err)
	}
	var arrays []Array
	seen := map[string]bool{}
	for _, entry := range z.File {
		name, ok := strings.CutSuffix(entry.Name, ".npy")
		if !ok || name == "" {
			return nil, fmt.Errorf("entry %q; want names that end in .npy", entry.Name)
		}
		if seen[name] {
			return nil, fmt.Errorf("two arrays are named %q", name)
		}
		seen[name] = true
		a, err := decodeEntry(entry)
		if err != nil {
			return nil, fmt.Errorf("array %q: %w", name, err)
		}
		a.Name = name
		arrays = append(arrays, a)
	}
	return arrays, nil
}

// decodeEntry does not rely on the size in the archive's directory, which may lie.
func decodeEntry(entry *zip.File) (Array, error) {
	r, err := entry.Open()
	if err != nil {
		return Array{}, err
	}
	defer r.Close()
	return decodeNPY(r, -1)
}
