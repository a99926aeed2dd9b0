package nested

import (
	"sync"
	"sync/atomic"
)

// task is a piece of the tree that one worker eliminates alone: a whole subtree,
// fronts first … last, or a single front above such subtrees.
type task struct {
	first, last int32
	above       int32 // task that needs this one, −1: none
	needs       int32 // tasks that this one needs
}

// plan cuts the tree into tasks. One worker gets the whole tree; for more there
// are enough subtrees of at most a fixed share of the work to keep all of them
// busy. Which task a front belongs to has no influence on its arithmetic.
func plan(s *Symbolic, workers int) []task {
	n := len(s.fronts)
	below := make([]float64, n) // flops in the subtree
	first := make([]int32, n)   // its first front
	for id := range s.fronts {
		f := &s.fronts[id]
		below[id], first[id] = f.flops+2000, int32(id) // 2 000 flops' worth of time is spent on any front
		for _, c := range [2]int32{f.right, f.left} {
			if c >= 0 {
				below[id] += below[c]
				first[id] = min(first[id], first[c])
			}
		}
	}
	share := below[n-1]
	if workers > 1 {
		share /= float64(8 * workers)
	}
	var tasks []task
	of := make([]int32, n) // task of the root of a subtree or of a front above
	for id := 0; id < n; id++ {
		f := &s.fronts[id]
		small := below[id] <= share
		if small && f.parent >= 0 && below[f.parent] <= share {
			continue
		}
		of[id] = int32(len(tasks))
		tasks = append(tasks, task{first: int32(id), last: int32(id), above: -1})
		if small {
			tasks[of[id]].first = first[id]
			continue
		}
		for _, c := range [2]int32{f.left, f.right} {
			if c >= 0 {
				tasks[of[c]].above = of[id]
				tasks[of[id]].needs++
			}
		}
	}
	return tasks
}

// run eliminates all fronts. If some fail it returns the error of the first of
// them in the order of elimination, whatever the number of workers: every front
// whose children succeeded is tried.
func (f *Factor) run(eliminate func(w *worker, f *Factor, id int) error) error {
	tasks := f.tasks
	type state struct {
		waiting atomic.Int32 // tasks needed that are not yet done
		barred  atomic.Bool  // one of them, or this one, has failed
		err     error
	}
	states := make([]state, len(tasks))
	ready := make(chan int32, len(tasks))
	var left atomic.Int32
	left.Store(int32(len(tasks)))
	for i := range tasks {
		states[i].waiting.Store(tasks[i].needs)
		if tasks[i].needs == 0 {
			ready <- int32(i)
		}
	}
	// do eliminates the fronts of task i and returns the task above it if that has
	// become ready, else −1.
	do := func(w *worker, i int32) int32 {
		t, st := &tasks[i], &states[i]
		for id := t.first; id <= t.last && !st.barred.Load(); id++ {
			if st.err = eliminate(w, f, int(id)); st.err != nil {
				st.barred.Store(true)
			}
		}
		if t.above < 0 {
			return -1
		}
		if st.barred.Load() {
			states[t.above].barred.Store(true)
		}
		if states[t.above].waiting.Add(-1) > 0 {
			return -1
		}
		return t.above
	}
	work := func(w *worker) {
		for i := range ready {
			// A worker that completes what a task above needs goes on with that
			// task: the matrices it takes over are then returned soonest.
			for i >= 0 {
				i = do(w, i)
				if left.Add(-1) == 0 {
					close(ready)
				}
			}
		}
	}
	var wg sync.WaitGroup
	for _, w := range f.workers[1:] {
		wg.Go(func() { work(w) })
	}
	work(f.workers[0])
	wg.Wait()
	for i := range states { // tasks stand in the order of elimination
		if err := states[i].err; err != nil {
			return err
		}
	}
	return nil
}
