package store

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/tenter-go/tenter/lattice/refine"
)

func writeFile(t *testing.T, path string, data []byte) {
	t.Helper()
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
}

// onlyFile fails the test unless the folder holds the one file name with the
// given content.
func onlyFile(t *testing.T, folder, name, content string) {
	t.Helper()
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if e.Name() != name {
			t.Errorf("folder holds %q; want only %q", e.Name(), name)
		}
	}
	got, err := os.ReadFile(filepath.Join(folder, name))
	if err != nil || string(got) != content {
		t.Errorf("%s holds %q, %v; want %q", name, got, err, content)
	}
}

func TestReplace(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "a.txt")
	say := func(text string) func(io.Writer) error {
		return func(w io.Writer) error {
			_, err := io.WriteString(w, text)
			return err
		}
	}
	if err := Replace(path, say("first")); err != nil {
		t.Fatal(err)
	}
	onlyFile(t, folder, "a.txt", "first")
	if err := os.Chmod(path, 0o640); err != nil {
		t.Fatal(err)
	}
	if err := Replace(path, say("second")); err != nil {
		t.Fatal(err)
	}
	onlyFile(t, folder, "a.txt", "second")
	if info, err := os.Stat(path); err != nil || info.Mode().Perm() != 0o640 {
		t.Errorf("permissions %v, %v; want 0640 kept", info.Mode(), err)
	}

	broken := errors.New("disk on fire")
	err := Replace(path, func(w io.Writer) error {
		if err := say("half a th")(w); err != nil {
			return err
		}
		return broken
	})
	if !errors.Is(err, broken) || !strings.Contains(err.Error(), path) {
		t.Errorf("error %v; want the writer's, with the path", err)
	}
	onlyFile(t, folder, "a.txt", "second")

	func() {
		defer func() {
			if recover() == nil {
				t.Error("a panic of write was swallowed")
			}
		}()
		Replace(path, func(w io.Writer) error { panic("oh") })
	}()
	onlyFile(t, folder, "a.txt", "second")
}

func TestReplaceBadPath(t *testing.T) {
	folder := t.TempDir()
	never := func(io.Writer) error {
		t.Error("write was called")
		return nil
	}
	for path, message := range map[string]string{
		"":                                     "no file name",
		folder:                                 "is a folder",
		filepath.Join(folder, "none", "a.txt"): "no such file",
	} {
		if err := Replace(path, never); err == nil || !strings.Contains(err.Error(), message) {
			t.Errorf("path %q: error %v; want one with %q", path, err, message)
		}
	}
}

func TestWritersLeaveTheOldFile(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "kept")
	writeFile(t, path, []byte("old"))
	for name, err := range map[string]error{
		"npy":     WriteNPY(path, Array{Shape: []int{2}}),
		"npz":     WriteNPZ(path, Array{Name: "a", Data: []float64{1}}, Array{Name: "b", Shape: []int{2}}),
		"table":   WriteTable(path, Table{Header: []string{"a"}, Rows: [][]float64{{1}, {1, 2}}}),
		"results": WriteResults(path, []refine.Result{{Value: 1}}),
	} {
		if err == nil || !strings.Contains(err.Error(), path) {
			t.Errorf("%s: error %v; want one with the path", name, err)
		}
	}
	onlyFile(t, folder, "kept", "old")
}
