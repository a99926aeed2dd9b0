package main

import (
	_ "embed"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"time"

	"github.com/tenter-go/tenter/internal/nested"
)

var (
	//go:embed testdata/splu.py
	spluPython []byte
	//go:embed testdata/cholmod.c
	cholmodC []byte
)

// blockCases are the factorisations of the block solvers.
func blockCases(dir string) []bench {
	python := newPython(dir)
	c := newCholmod(dir)
	total, factor := func(t [4]float64) float64 { return t[0] + t[1] + t[3] }, func(t [4]float64) float64 { return t[2] }
	return append([]bench{
		{"factor5-512-splu", "SciPy splu, MMD_AT_PLUS_A, symmetric mode", dissect(512, 5, total), python.run(512, 5)},
		{"factor13-512-splu", "SciPy splu, MMD_AT_PLUS_A, symmetric mode", dissect(512, 13, total), python.run(512, 13)},
		{"factor5-512-cholmod", "CHOLMOD, METIS, BLAS", dissect(512, 5, total), c.run(512, total)},
		{"factor5-1024-cholmod", "CHOLMOD, METIS, BLAS", dissect(1024, 5, total), c.run(1024, total)},
		{"refactor5-1024-cholmod", "CHOLMOD, METIS, BLAS", dissect(1024, 5, factor), c.run(1024, factor)},
		{"growth5-256-1024", "exponent p of N^p, and its bar", growth, func() (float64, error) { return 1.6, nil }},
	}, historyCases()...)
}

// dissect times analysis, factorisation, a second factorisation and a solve.
func dissect(n, points int, of func([4]float64) float64) func() (float64, error) {
	return func() (float64, error) {
		p, values := gridMatrix(n, points)
		var t [4]float64
		lap := time.Now()
		clock := func(k int) {
			t[k] = time.Since(lap).Seconds()
			lap = time.Now()
		}
		s, err := nested.Analyse(p)
		if err != nil {
			return 0, err
		}
		clock(0)
		f, err := s.Cholesky(values, runtime.GOMAXPROCS(0))
		if err != nil {
			return 0, err
		}
		clock(1)
		if err := f.Refactor(values); err != nil {
			return 0, err
		}
		clock(2)
		x, b := make([]float64, p.N), make([]float64, p.N)
		for i := range b {
			b[i] = 1
		}
		lap = time.Now()
		f.Solve(x, b)
		clock(3)
		return of(t), nil
	}
}

// growth returns the exponent of the time of a factorisation from 256² to
// 1024² unknowns.
func growth() (float64, error) {
	factor := func(t [4]float64) float64 { return t[1] }
	small, err := dissect(256, 5, factor)()
	if err != nil {
		return 0, err
	}
	large, err := dissect(1024, 5, factor)()
	return math.Log(large/small) / math.Log(16), err
}

// gridMatrix is the five-point Laplacian of an n × n grid plus 0.01, or its
// square.
func gridMatrix(n, points int) (nested.Pattern, []float64) {
	p := nested.Pattern{N: n * n, Rows: n, Cols: n, Row: make([]int32, n*n), Col: make([]int32, n*n), Ptr: make([]int, 1, n*n+1)}
	var values []float64
	// The square has 1 and 2 along the axes, 2 and 1 in the diagonals; near the
	// rim the diagonal loses one for each missing neighbour.
	inside := func(r, c int) bool { return r >= 0 && r < n && c >= 0 && c < n }
	for i := range n * n {
		r, c := i/n, i%n
		p.Row[i], p.Col[i] = int32(r), int32(c)
		add := func(dr, dc int, v float64) {
			if inside(r+dr, c+dc) {
				p.Adj = append(p.Adj, int32(i+dr*n+dc))
				values = append(values, v)
			}
		}
		const a = 4.01
		if points == 5 {
			add(-1, 0, -1)
			add(0, -1, -1)
			add(0, 0, a)
		} else {
			neighbours := 0.0
			for _, d := range [][2]int{{-1, 0}, {1, 0}, {0, -1}, {0, 1}} {
				if inside(r+d[0], c+d[1]) {
					neighbours++
				}
			}
			add(-2, 0, 1)
			add(-1, -1, 2)
			add(-1, 0, -2*a)
			add(-1, 1, 2)
			add(0, -2, 1)
			add(0, -1, -2*a)
			add(0, 0, a*a+neighbours)
		}
		p.Ptr = append(p.Ptr, len(p.Adj))
	}
	return p, values
}

// python is a Python that has SciPy.
type python struct {
	name, script string
	err          error
}

func newPython(dir string) *python {
	p := &python{script: filepath.Join(dir, "splu.py")}
	if p.err = os.WriteFile(p.script, spluPython, 0o666); p.err == nil {
		p.name, p.err = pythonWith("scipy.sparse.linalg")
	}
	return p
}

// pythonWith returns the path of a Python that has a module.
func pythonWith(module string) (string, error) {
	for _, name := range []string{"python3", "python3.13", "python3.12", "python3.11"} {
		for _, folder := range filepath.SplitList(os.Getenv("PATH")) {
			path := filepath.Join(folder, name)
			if exec.Command(path, "-c", "import "+module).Run() == nil {
				return path, nil
			}
		}
	}
	return "", errors.New("not installed")
}

func (p *python) run(n, points int) func() (float64, error) {
	return func() (float64, error) {
		if p.err != nil {
			return 0, p.err
		}
		out, err := exec.Command(p.name, p.script, strconv.Itoa(n), strconv.Itoa(points)).Output()
		if err != nil {
			return 0, err
		}
		return strconv.ParseFloat(strings.TrimSpace(string(out)), 64)
	}
}

// cholmod is a C program with a general sparse Cholesky library.
type cholmod struct {
	path string
	err  error
}

func newCholmod(dir string) *cholmod {
	c := &cholmod{path: filepath.Join(dir, "cholmod")}
	source := c.path + ".c"
	if c.err = os.WriteFile(source, cholmodC, 0o666); c.err != nil {
		return c
	}
	if exec.Command("gcc", "-O2", "-I/usr/include/suitesparse", "-o", c.path, source, "-lcholmod").Run() != nil {
		c.err = errors.New("not installed")
	}
	return c
}

func (c *cholmod) run(n int, of func([4]float64) float64) func() (float64, error) {
	return func() (float64, error) {
		if c.err != nil {
			return 0, c.err
		}
		out, err := exec.Command(c.path, strconv.Itoa(n)).Output()
		if err != nil {
			return 0, err
		}
		var t [4]float64
		_, err = fmt.Sscan(string(out), &t[0], &t[1], &t[2], &t[3])
		return of(t), err
	}
}
