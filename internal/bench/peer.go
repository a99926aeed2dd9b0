package main

import (
	_ "embed"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
)

var (
	//go:embed testdata/leapfrog.c
	leapfrogC []byte
	//go:embed testdata/leapfrog.py
	leapfrogPython []byte
)

// peer is a C program compiled on the spot.
type peer struct {
	path string
	err  error
}

func newPeer(dir, name string, flags ...string) *peer {
	p := &peer{path: filepath.Join(dir, name)}
	if _, p.err = exec.LookPath("gcc"); p.err != nil {
		p.err = errors.New("not installed")
		return p
	}
	source := p.path + ".c"
	if p.err = os.WriteFile(source, leapfrogC, 0o666); p.err != nil {
		return p
	}
	args := append([]string{"-O3", "-march=native", "-ffast-math", "-o", p.path, source}, flags...)
	if out, err := exec.Command("gcc", append(args, "-lm")...).CombinedOutput(); err != nil {
		p.err = fmt.Errorf("gcc: %w: %s", err, out)
	}
	return p
}

func (p *peer) name() string { return "C, gcc -O3 -march=native -ffast-math" }

func (p *peer) run(sites, steps int) func() (float64, error) {
	return func() (float64, error) {
		ns, _, err := p.output(sites, steps)
		return ns, err
	}
}

// output returns what the program prints: its time per site and step, and the
// field a third along the line after the last step.
func (p *peer) output(sites, steps int) (ns, phi float64, err error) {
	if p.err != nil {
		return 0, 0, p.err
	}
	out, err := exec.Command(p.path, strconv.Itoa(sites), strconv.Itoa(steps)).Output()
	if err != nil {
		return 0, 0, err
	}
	_, err = fmt.Sscan(string(out), &ns, &phi)
	return ns, phi, err
}

// numpyLoop is the loop of the C program by whole arrays of NumPy.
type numpyLoop struct {
	python, script string
	err            error
}

func newNumpyLoop(dir string) *numpyLoop {
	p := &numpyLoop{script: filepath.Join(dir, "leapfrog.py")}
	if p.err = os.WriteFile(p.script, leapfrogPython, 0o666); p.err == nil {
		p.python, p.err = pythonWith("numpy")
	}
	return p
}

func (p *numpyLoop) run(potential string, sites, steps int) func() (float64, error) {
	return func() (float64, error) {
		if p.err != nil {
			return 0, p.err
		}
		out, err := exec.Command(p.python, p.script, potential, strconv.Itoa(sites), strconv.Itoa(steps)).Output()
		if err != nil {
			return 0, err
		}
		return strconv.ParseFloat(strings.TrimSpace(string(out)), 64)
	}
}
