package action

import (
	"fmt"
	"math"
	"sync"

	"github.com/tenter-go/tenter/field"
	"github.com/tenter-go/tenter/lattice"
)

// Discrete is a density on a block: the discrete action and everything derived
// from it. Make one with [New]. It does not change afterwards and may be used
// from several goroutines.
//
// A history handed to its methods must lie on its block: equally many slices,
// components and sites, else they panic.
type Discrete struct {
	block   lattice.Block
	wave    Wave
	xs      []float64 // positions of the sites
	u       []float64 // their shares of a cell
	elastic *elastic
	viscous *elastic // the nearest-neighbour links that carry β

	rho, kappa, sigma, source, alpha, beta *track
	kappaSites                             *track // κ on sites; nil if averaged or not needed
	flux                                   [2]*track

	idle sync.Pool // of *scratch, for sums that are asked for again and again
}

// Block returns the block.
func (s *Discrete) Block() lattice.Block { return s.block }

// Radius returns how many sites the force on a site looks to each side.
func (s *Discrete) Radius() int { return s.elastic.radius }

// Components returns the number of components.
func (s *Discrete) Components() int { return s.wave.Components }

// Density returns the density with its defaults filled in.
func (s *Discrete) Density() Wave { return s.wave }

// Signature returns whether the action is of T − U or T + U.
func (s *Discrete) Signature() Signature { return s.wave.Signature }

// Conservative returns nil if the equation is the condition that the action be
// stationary, and a *NoActionError if it has losses or open ends.
func (s *Discrete) Conservative() error {
	if part := s.lossy(); part != "" {
		return &NoActionError{Part: part}
	}
	return nil
}

// scratch is the working memory for one slice.
type scratch struct {
	slope, part                        field.Slice
	curve                              field.Slice
	kl, ks, rb, ra, sigma, src, al, be []float64
	tmp                                []float64
	one                                [1]float64
}

func (s *Discrete) newScratch() *scratch {
	n, c := len(s.xs), s.wave.Components
	row := func() []float64 { return make([]float64, n) }
	return &scratch{
		slope: field.NewSlice(c, n), part: field.NewSlice(c, n), curve: field.NewSlice(c*c, n),
		kl: row(), ks: row(), rb: row(), ra: row(), sigma: row(), src: row(), al: row(), be: row(), tmp: row(),
	}
}

// borrow returns working memory that nobody else uses until it is given back.
func (s *Discrete) borrow() *scratch {
	if w, ok := s.idle.Get().(*scratch); ok {
		return w
	}
	return s.newScratch()
}

func (s *Discrete) giveBack(w *scratch) { s.idle.Put(w) }

// at returns where and when slice values stand, for a Potential.
func (s *Discrete) at(t float64) Sites { return Sites{T: t, X: s.xs} }

// kappaAt returns κ of component c at time t, row n.
func (s *Discrete) kappaAt(w *scratch, c, n int, t float64) stiffness {
	k := stiffness{links: s.kappa.row(w.kl, c, n, t)}
	if s.elastic.radius < 2 {
		return k
	}
	if s.kappaSites != nil {
		k.sites = s.kappaSites.row(w.ks, c, n, t)
		return k
	}
	k.sites = w.ks
	links, last := k.links, len(s.xs)-1
	for i := 1; i < last; i++ {
		k.sites[i] = 0.5 * (links[i-1] + links[i])
	}
	k.sites[0], k.sites[last] = links[0], links[last-1]
	if s.block.Space.Periodic {
		k.sites[0] = 0.5 * (links[last] + links[0])
		k.sites[last] = 0.5 * (links[last-1] + links[last])
	}
	return k
}

// rhoAround returns ρ on the time links before and after slice n. Beyond the
// first and last slice a function is sampled where the missing link would be
// and a table repeats its nearest row; the march needs them there, the action
// does not.
func (s *Discrete) rhoAround(w *scratch, c, n int) (before, after []float64) {
	return s.rhoLink(w.rb, c, n-1), s.rhoLink(w.ra, c, n)
}

func (s *Discrete) rhoLink(buf []float64, c, l int) []float64 {
	clock := s.block.Time
	links := clock.Links()
	if clock.Periodic {
		l = (l + links) % links
	}
	return s.rho.row(buf, c, min(max(l, 0), links-1), clock.Between(l))
}

// rhoAt returns ρ on the sites at time t, row n; tables are averaged over the
// links around the slice.
func (s *Discrete) rhoAt(w *scratch, c, n int, t float64) []float64 {
	if !s.rho.onlyAtRows() {
		return s.rho.row(w.rb, c, 0, t)
	}
	before, after := s.rhoAround(w, c, n)
	for i, r := range after {
		before[i] = 0.5 * (before[i] + r)
	}
	return before
}

// addForce adds scale·f to component c of dst, with the force per hk
//
//	f = [κφ_x]_x − uσV′ + uJ + end flux
//
// of the field phi at time t, row n; slope is V′.
func (s *Discrete) addForce(dst []float64, w *scratch, phi, slope []float64, c, n int, t, scale float64) {
	s.elastic.addForce(dst, phi, s.kappaAt(w, c, n, t), s.block.Space.JumpOf(c), scale)
	sigma, src := s.sigma.row(w.sigma, c, n, t), s.source.row(w.src, c, n, t)
	last := len(dst) - 1
	for i := 1; i < last; i++ {
		dst[i] += float64(scale * (src[i] - float64(sigma[i]*slope[i])))
	}
	for _, i := range [2]int{0, last} {
		dst[i] += float64(scale * s.u[i] * (src[i] - float64(sigma[i]*slope[i])))
	}
	s.addFlux(dst, w, c, n, t, scale)
}

// addFlux adds the force of the prescribed end fluxes.
func (s *Discrete) addFlux(dst []float64, w *scratch, c, n int, t, scale float64) {
	if s.block.Space.Periodic {
		return
	}
	h := s.block.Space.Step
	last := len(dst) - 1
	left, right := s.fluxAt(w, c, n, t)
	for j, g := range s.elastic.flux[0] {
		dst[j] -= float64(scale*g*left) / h
	}
	for j, g := range s.elastic.flux[1] {
		dst[last-j] += scale * g * right / h
	}
}

func (s *Discrete) fluxAt(w *scratch, c, n int, t float64) (left, right float64) {
	left = s.flux[0].row(w.one[:], c, n, t)[0]
	right = s.flux[1].row(w.one[:], c, n, t)[0]
	return left, right
}

// rowAt returns the row of tables nearest to time t.
func (s *Discrete) rowAt(t float64) int {
	n, _ := s.block.Time.Nearest(t)
	return n
}

// sign is + for T − U and − for T + U.
func (s *Discrete) sign() float64 {
	if s.wave.Signature == Euclidean {
		return -1
	}
	return 1
}

// next returns the slice after n of h and the jump between them; on a block
// that is periodic in time the last slice is followed by the first.
func (s *Discrete) next(n int) (m int, wraps bool) {
	if n+1 < s.block.Slices() {
		return n + 1, false
	}
	return 0, true
}

func (s *Discrete) mustFit(h *field.History) {
	b := s.block
	if h.Components != s.wave.Components || h.Block.Slices() != b.Slices() || h.Block.Sites() != b.Sites() || len(h.Data) != b.Slices()*s.wave.Components*b.Sites() {
		panic(fmt.Sprintf("action: history of %d slices × %d components × %d sites on a block of %d × %d × %d",
			h.Block.Slices(), h.Components, h.Block.Sites(), b.Slices(), s.wave.Components, b.Sites()))
	}
}

// Fits returns an error unless the history is finite and lies on the block of
// the action.
func (s *Discrete) Fits(h *field.History) error {
	if err := h.Check(); err != nil {
		return err
	}
	b := s.block
	if h.Components != s.wave.Components || h.Block.Slices() != b.Slices() || h.Block.Sites() != b.Sites() {
		return fmt.Errorf("action: history of %d slices × %d components × %d sites; the block has %d × %d × %d",
			h.Block.Slices(), h.Components, h.Block.Sites(), b.Slices(), s.wave.Components, b.Sites())
	}
	return nil
}

// FitsState returns an error unless the state is finite and lies on a slice of
// the block.
func (s *Discrete) FitsState(st field.State) error {
	if err := st.Check(); err != nil {
		return err
	}
	if st.Field.Components != s.wave.Components || st.Field.Sites != len(s.xs) {
		return fmt.Errorf("action: state of %d components × %d sites; the block has %d × %d", st.Field.Components, st.Field.Sites, s.wave.Components, len(s.xs))
	}
	return nil
}

// BetweenSlices returns nil if the force is known at every time, and an error
// that names the coefficient if it is known at the slices of the block only.
// Methods with steps inside a time link cannot be used then; the march can.
func (s *Discrete) BetweenSlices() error {
	if s.rho.fixed == nil {
		return fmt.Errorf("action: ρ varies in time; use leapfrog, whose time links carry it")
	}
	for _, t := range []struct {
		name string
		tr   *track
	}{{"κ", s.kappa}, {"σ", s.sigma}, {"source", s.source}, {"left flux", s.flux[0]}, {"right flux", s.flux[1]}, {"α", s.alpha}, {"β", s.beta}} {
		if t.tr.onlyAtRows() {
			return fmt.Errorf("action: the table of %s is known at the slices of the block only; use leapfrog, or give a function of x and t", t.name)
		}
	}
	return nil
}

// impedance returns √(ρκ) at the left or right end, for open ends.
func (s *Discrete) impedance(w *scratch, c, n int, t float64, right bool) float64 {
	rho := s.rhoAt(w, c, n, t)
	k := s.kappa.row(w.kl, c, n, t)
	if right {
		return math.Sqrt(rho[len(rho)-1] * k[len(k)-1])
	}
	return math.Sqrt(rho[0] * k[0])
}
