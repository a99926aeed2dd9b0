package store

import (
	"bufio"
	"fmt"

	"github.com/tenter-go/tenter/field"
)

// A HistoryWriter writes a history to an NPY file slice by slice, so that a run
// need not be held in memory. The file appears under its name at Close, when the
// number of slices is known; until then, and after Discard, whatever was there
// before stays.
//
//	w, err := store.NewHistoryWriter("run.npy", 1, line.Sites)
//	...
//	defer w.Discard() // no effect after Close
//	for ... {
//		err = w.Append(slice)
//	}
//	err = w.Close()
type HistoryWriter struct {
	components, sites, slices int

	draft *draft
	w     *bufio.Writer
	err   error // the first error, returned ever after
}

// NewHistoryWriter starts a history of the given numbers of components and sites.
func NewHistoryWriter(path string, components, sites int) (*HistoryWriter, error) {
	if components < 1 || sites < 1 {
		return nil, fmt.Errorf("store: history of %d components × %d sites; want at least 1 × 1", components, sites)
	}
	d, err := newDraft(path)
	if err != nil {
		return nil, err
	}
	h := &HistoryWriter{components: components, sites: sites, draft: d, w: bufio.NewWriterSize(d.file, 1<<16)}
	_, h.err = h.w.Write(header([]int{0, components, sites}))
	return h, nil
}

// Append writes the next slice. It is an error if its shape is not that of the
// history, or after Close or Discard.
func (h *HistoryWriter) Append(s field.Slice) error {
	if h.draft.file == nil {
		return fmt.Errorf("store: %s: append to a history that is closed", h.draft.path)
	}
	if s.Components != h.components || s.Sites != h.sites {
		return fmt.Errorf("store: %s: slice %d has %d components × %d sites; want %d × %d", h.draft.path, h.slices, s.Components, s.Sites, h.components, h.sites)
	}
	if h.err == nil {
		h.err = writeSlice(h.w, s)
	}
	if h.err != nil {
		return fmt.Errorf("store: %s: slice %d: %w", h.draft.path, h.slices, h.err)
	}
	h.slices++
	return nil
}

// Slices returns how many slices have been appended.
func (h *HistoryWriter) Slices() int { return h.slices }

// Close writes the number of slices into the header and gives the file its name.
// If Close fails, or an Append failed before, no file is left.
func (h *HistoryWriter) Close() error {
	if h.draft.file == nil {
		return fmt.Errorf("store: %s: history closed twice", h.draft.path)
	}
	defer h.draft.discard()
	if h.err == nil {
		h.err = h.w.Flush()
	}
	if h.err == nil {
		_, h.err = h.draft.file.WriteAt(header([]int{h.slices, h.components, h.sites}), 0)
	}
	if h.err != nil {
		return fmt.Errorf("store: %s: %w", h.draft.path, h.err)
	}
	return h.draft.keep()
}

// Discard drops what was written, unless Close has been called.
func (h *HistoryWriter) Discard() { h.draft.discard() }
