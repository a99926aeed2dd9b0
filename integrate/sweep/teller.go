package sweep

import (
	"fmt"
	"io"
	"time"
)

// teller writes how far a sweep is.
type teller struct {
	w              io.Writer
	old, now, all  int // points from the file, done, in all
	begun, written time.Time
}

func newTeller(w io.Writer, old, all int) *teller {
	return &teller{w: w, old: old, now: old, all: all, begun: time.Now()}
}

// tell counts a point.
func (t *teller) tell() {
	t.now++
	if t.w == nil || time.Since(t.written) < tellEvery {
		return
	}
	t.written = time.Now()
	spent := time.Since(t.begun)
	left := spent * time.Duration(t.all-t.now) / time.Duration(t.now-t.old)
	fmt.Fprintf(t.w, "\r%d of %d, %v to go   ", t.now, t.all, left.Round(time.Second))
}

func (t *teller) end() {
	if t.w != nil {
		fmt.Fprintf(t.w, "\r%d of %d in %v          \n", t.now, t.all, time.Since(t.begun).Round(100*time.Millisecond))
	}
}
