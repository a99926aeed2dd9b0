package main

import (
	"flag"
	"fmt"
	"log"
	"os"
	"slices"
	"strings"
)

// A bench is a case: two timings to be compared, in the unit of its set.
type bench struct {
	name, peerName string
	ours, peer     func() (float64, error)
}

var sets = map[string]struct {
	unit  string
	cases func(dir string) []bench
}{
	"evolve": {"ns per site and step", evolveCases},
	"block":  {"seconds", blockCases},
}

func main() {
	log.SetFlags(0)
	log.SetPrefix("bench: ")
	var names []string
	for name := range sets {
		names = append(names, name)
	}
	slices.Sort(names)
	name := flag.String("set", "evolve", "set of cases: "+strings.Join(names, ", "))
	only := flag.String("only", "", "run the cases whose name contains this")
	rounds := flag.Int("rounds", 5, "alternating runs of each case")
	child := flag.Bool("portable", false, "print the time of the path in use and nothing else")
	flag.Parse()
	if *child {
		if err := printPortable(); err != nil {
			log.Fatal(err)
		}
		return
	}
	set, ok := sets[*name]
	if !ok || *rounds < 1 {
		log.Fatalf("no set %q with %d rounds; want one of %s and at least 1 round", *name, *rounds, strings.Join(names, ", "))
	}
	dir, err := os.MkdirTemp("", "bench")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(dir)
	if *name == "evolve" {
		fmt.Printf("memory bandwidth of one core, by a triad: %.3g GB/s\n", bandwidth())
	}
	fmt.Printf("%-24s %10s %10s %8s  peer (%s)\n", "case", "ours", "peer", "ratio", set.unit)
	for _, b := range set.cases(dir) {
		if strings.Contains(b.name, *only) {
			b.print(*rounds)
		}
	}
}

// print runs both sides in turn and prints the medians.
func (b bench) print(rounds int) {
	var ours, peer []float64
	for range rounds {
		t, err := b.ours()
		if err != nil {
			fmt.Printf("%-24s failed: %v\n", b.name, err)
			return
		}
		ours = append(ours, t)
		p, err := b.peer()
		if err != nil {
			fmt.Printf("%-24s %10.4g %10s %8s  %s: %v\n", b.name, median(ours), "-", "-", b.peerName, err)
			return
		}
		peer = append(peer, p)
	}
	fmt.Printf("%-24s %10.4g %10.4g %8.3f  %s\n", b.name, median(ours), median(peer), median(ours)/median(peer), b.peerName)
}

func median(v []float64) float64 {
	v = slices.Sorted(slices.Values(v))
	return 0.5 * (v[(len(v)-1)/2] + v[len(v)/2])
}
