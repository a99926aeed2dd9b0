package kernel

import (
	"fmt"
	"os"
)

// A path is one of the ways to the same bits.
type path int

const (
	portable path = iota
	avx2
	avx512
)

func (p path) String() string { return [...]string{"portable", "avx2", "avx512"}[p] }

// taken is the path that this process takes.
var taken = choose(os.Getenv("TENTER_KERNEL"), fastest())

// few is the number of sites, such as those beside an end, for which the portable
// path is quicker than the way into assembly.
const few = 2

// Path returns the name of the path in use: "portable", "avx2" or "avx512".
func Path() string { return taken.String() }

// choose returns the path that the environment names, or the fastest. A path
// that the processor cannot take stops the program: a test that asks for one
// must not pass on another.
func choose(name string, fastest path) path {
	if name == "" {
		return fastest
	}
	for p := portable; p <= fastest; p++ {
		if p.String() == name {
			return p
		}
	}
	panic(fmt.Sprintf("kernel: TENTER_KERNEL is %q; want portable … %v, or nothing", name, fastest))
}
