package nested

import (
	"slices"
	"sync"
)

// stack lends storage that is given back in the opposite order. Its chunks are
// never moved and never freed, so a second factorisation finds them ready.
//
// A worker needs two stacks: it takes the matrix that a front leaves to its
// parent from stack number depth mod 2. When a front is assembled its children's
// matrices lie on top of one stack and its own goes onto the other.
type stack struct {
	chunks [][]float64
	top    height
}

// height says how much of a stack is lent: whole chunks, and values of the next.
type height struct{ chunk, used int }

// smallestChunk is in float64: four mebibytes.
const smallestChunk = 1 << 19

// take returns n values that hold anything.
func (s *stack) take(n int) []float64 {
	for {
		if s.top.chunk == len(s.chunks) {
			size := smallestChunk
			if k := len(s.chunks); k > 0 {
				size = len(s.chunks[k-1]) * 3 / 2
			}
			s.chunks = append(s.chunks, reserve(max(size, n)))
		}
		c := s.chunks[s.top.chunk]
		if s.top.used+n <= len(c) {
			x := c[s.top.used : s.top.used+n : s.top.used+n]
			s.top.used += n
			return x
		}
		s.top = height{s.top.chunk + 1, 0}
	}
}

func (s *stack) size() int {
	n := 0
	for _, c := range s.chunks {
		n += len(c)
	}
	return n
}

// pool lends storage that passes from one worker to another.
type pool struct {
	mu   sync.Mutex
	free [][]float64
	all  int
}

// take returns n values that hold anything, from the tightest free piece.
func (p *pool) take(n int) []float64 {
	if n == 0 {
		return nil
	}
	p.mu.Lock()
	defer p.mu.Unlock()
	best := -1
	for i, x := range p.free {
		if cap(x) >= n && (best < 0 || cap(x) < cap(p.free[best])) {
			best = i
		}
	}
	if best >= 0 {
		x := p.free[best][:n]
		p.free = slices.Delete(p.free, best, best+1)
		return x
	}
	p.all += n
	return reserve(n)
}

func (p *pool) give(x []float64) {
	if cap(x) == 0 {
		return
	}
	p.mu.Lock()
	p.free = append(p.free, x)
	p.mu.Unlock()
}
