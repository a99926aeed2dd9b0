package nested

import "testing"

func TestStackReturnsToHeight(t *testing.T) {
	var s stack
	a := s.take(10)
	h := s.top
	b := s.take(smallestChunk) // does not fit beside a
	c := s.take(7)
	a[9], b[0], c[6] = 1, 2, 3
	if a[9] != 1 || b[0] != 2 || len(s.chunks) != 2 {
		t.Fatalf("%d chunks, want 2 that do not overlap", len(s.chunks))
	}
	size := s.size()
	s.top = h
	if d := s.take(5); &d[0] == &a[0] || s.size() != size {
		t.Error("storage was lent twice or grew without need")
	}
}

func TestPoolLendsTheTightest(t *testing.T) {
	var p pool
	small, large := p.take(10), p.take(100)
	p.give(large)
	p.give(small)
	if x := p.take(8); len(x) != 8 || &x[0] != &small[0] {
		t.Error("8 values do not come from the piece of 10")
	}
	if x := p.take(50); &x[0] != &large[0] || p.all != 110 {
		t.Error("50 values do not come from the piece of 100")
	}
	if p.take(0) != nil {
		t.Error("nothing is something")
	}
}
