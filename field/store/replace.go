package store

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
	"os"
	"path/filepath"
)

// Replace makes write's output the content of the file at path, all or nothing.
// The bytes go to a temporary file in the same folder, which is synced and
// renamed to path when write has returned nil. If anything fails, or write
// panics, a file that was at path is untouched and the temporary file is removed.
// A replaced file keeps its permissions; a symbolic link is replaced, not
// followed. The writer passed to write is buffered.
func Replace(path string, write func(io.Writer) error) error {
	d, err := newDraft(path)
	if err != nil {
		return err
	}
	defer d.discard()
	w := bufio.NewWriterSize(d.file, 1<<16)
	if err := write(w); err != nil {
		return fmt.Errorf("store: %s: %w", path, err)
	}
	if err := w.Flush(); err != nil {
		return fmt.Errorf("store: %s: %w", path, err)
	}
	return d.keep()
}

// A draft is a temporary file that becomes the file at path, or nothing.
type draft struct {
	path string
	file *os.File // nil once kept or discarded
}

func newDraft(path string) (*draft, error) {
	folder, name := filepath.Split(path)
	if name == "" {
		return nil, fmt.Errorf("store: path %q has no file name", path)
	}
	if info, err := os.Stat(path); err == nil && info.IsDir() {
		return nil, fmt.Errorf("store: %s is a folder; want the path of a file", path)
	}
	for {
		temporary := filepath.Join(folder, fmt.Sprintf(".%s.%08x.tmp", name, rand.Uint32()))
		file, err := os.OpenFile(temporary, os.O_RDWR|os.O_CREATE|os.O_EXCL, 0o666)
		if errors.Is(err, fs.ErrExist) {
			continue
		}
		if err != nil {
			return nil, fmt.Errorf("store: %w", err)
		}
		return &draft{path: path, file: file}, nil
	}
}

// keep syncs the draft and gives it its name.
func (d *draft) keep() error {
	defer d.discard()
	if old, err := os.Stat(d.path); err == nil {
		if err := d.file.Chmod(old.Mode().Perm()); err != nil {
			return fmt.Errorf("store: %w", err)
		}
	}
	if err := d.file.Sync(); err != nil {
		return fmt.Errorf("store: %w", err)
	}
	temporary := d.file.Name()
	if err := d.file.Close(); err != nil {
		return fmt.Errorf("store: %w", err)
	}
	if err := os.Rename(temporary, d.path); err != nil {
		return fmt.Errorf("store: %w", err)
	}
	d.file = nil
	// The rename itself survives a power cut only if the folder is synced.
	// Not every system can sync a folder, and the file is in place by now.
	if folder, err := os.Open(filepath.Dir(d.path)); err == nil {
		folder.Sync()
		folder.Close()
	}
	return nil
}

// discard removes the draft unless it was kept. It may be called again.
func (d *draft) discard() {
	if d.file == nil {
		return
	}
	d.file.Close() // an error if keep closed it already
	os.Remove(d.file.Name())
	d.file = nil
}
