package main

import (
	"fmt"
	"os"
	"os/exec"

	"github.com/tenter-go/tenter/action"
)

// portable times the portable path of the kernels, in a process of its own since
// the path is chosen once.
func portable() (float64, error) {
	self, err := os.Executable()
	if err != nil {
		return 0, err
	}
	cmd := exec.Command(self, "-portable")
	cmd.Env = append(os.Environ(), "TENTER_KERNEL=portable")
	out, err := cmd.Output()
	if err != nil {
		return 0, err
	}
	var ns float64
	_, err = fmt.Sscan(string(out), &ns)
	return ns, err
}

// printPortable is what that process does.
func printPortable() error {
	ns, err := race{potential: action.Phi4{}, steps: evolveSteps / 4}.run()
	fmt.Println(ns)
	return err
}

// plainGo times the best loop of plain Go that we could write for the arithmetic
// of the portable path.
func plainGo() (float64, error) {
	now, before, next := make([]float64, evolveSites), make([]float64, evolveSites), make([]float64, evolveSites)
	profile(now)
	profile(before)
	const steps = evolveSteps / 4
	begun := cpuTime()
	for range steps {
		plainStep(next, now, before, 0.25, 0.0025)
		before, now, next = now, next, before
	}
	return perSite(cpuTime()-begun, evolveSites, steps), nil
}

func plainStep(next, now, before []float64, link, pull float64) {
	n := len(now) - 2
	left, at, right, from, to := now[:n], now[1:][:n], now[2:][:n], before[1:][:n], next[1:][:n]
	for i, p := range at {
		to[i] = p + ((p - from[i]) + link*((right[i]-p)-(p-left[i])) - pull*(p*(p*p-1)))
	}
	end := func(i, inside int) {
		p := now[i]
		next[i] = p + ((p - before[i]) + 2*link*(now[inside]-p) - pull*(p*(p*p-1)))
	}
	end(0, 1)
	end(n+1, n)
}
