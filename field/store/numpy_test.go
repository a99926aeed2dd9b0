package store

import (
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"testing"
)

// python returns a Python that has NumPy, or "" if the search path holds none.
func python() string {
	for _, folder := range filepath.SplitList(os.Getenv("PATH")) {
		for _, name := range []string{"python3", "python"} {
			program, err := exec.LookPath(filepath.Join(folder, name))
			if err == nil && exec.Command(program, "-c", "import numpy").Run() == nil {
				return program
			}
		}
	}
	return ""
}

// NumPy opens what is written here, and what NumPy writes is read here. The bytes
// themselves are compared in TestNumPyBytes, with NumPy or without.
func TestNumPy(t *testing.T) {
	program := python()
	if program == "" {
		t.Log("no python3 with numpy on the path; only the stored bytes of NumPy were compared")
		return
	}
	folder := t.TempDir()
	h := ring(t)
	if err := WriteHistory(filepath.Join(folder, "h.npy"), h); err != nil {
		t.Fatal(err)
	}
	if err := WriteHistoryNPZ(filepath.Join(folder, "h.npz"), h); err != nil {
		t.Fatal(err)
	}
	if err := WriteNPY(filepath.Join(folder, "scalar.npy"), Array{Data: []float64{0.1}}); err != nil {
		t.Fatal(err)
	}
	script := `
import numpy as np
a = np.load("h.npy")
assert a.shape == (4, 2, 5) and a.dtype == np.float64 and a.flags.c_contiguous, a.shape
k = np.arange(40.0).reshape(4, 2, 5)
assert np.isnan(a[3, 1, 2])
a[3, 1, 2] = np.sqrt(k[3, 1, 2])
assert np.array_equal(a, np.sqrt(k))
z = np.load("h.npz")
assert sorted(z.files) == ["field", "space_axis", "space_jump", "t", "time_axis", "time_jump", "x"], z.files
assert z["field"].shape == (4, 2, 5) and z["t"].shape == (4,) and z["x"].shape == (5,)
assert np.array_equal(z["x"], 0.3 + np.arange(5)*0.7)
assert z["space_axis"].tolist() == [0.3, 0.7, 5, 0, 0, 1]
assert z["space_jump"].tolist() == [2*np.pi, 0]
s = np.load("scalar.npy")
assert s.shape == () and s == 0.1
np.save("back.npy", np.sqrt(k))
np.save("fortran.npy", np.asfortranarray(k[0]))
np.save("ints.npy", np.arange(3))
np.savez("back.npz", phi=k, x=np.array([]))
np.savez_compressed("deflated.npz", phi=k)
`
	cmd := exec.Command(program, "-c", script)
	cmd.Dir = folder
	if out, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	back, err := ReadNPY(filepath.Join(folder, "back.npy"))
	if err != nil {
		t.Fatal(err)
	}
	h.Data[h.Index(3, 1, 2)] = back.Data[h.Index(3, 1, 2)]
	if !slices.Equal(back.Shape, []int{4, 2, 5}) || !sameBits(back.Data, h.Data) {
		t.Errorf("NumPy's array of shape %v was read with other bits", back.Shape)
	}
	for _, name := range []string{"fortran.npy", "ints.npy"} {
		if _, err := ReadNPY(filepath.Join(folder, name)); err == nil {
			t.Errorf("no error for NumPy's %s", name)
		}
	}
	for name, want := range map[string]int{"back.npz": 2, "deflated.npz": 1} {
		arrays, err := ReadNPZ(filepath.Join(folder, name))
		if err != nil {
			t.Fatal(err)
		}
		if len(arrays) != want || arrays[0].Name != "phi" || len(arrays[0].Data) != 40 || arrays[0].Data[39] != 39 {
			t.Errorf("NumPy's %s was read as %v", name, arrays)
		}
	}
}
