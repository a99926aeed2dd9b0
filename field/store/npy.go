package store

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
)

// An Array is an array of float64 in C order: the last index runs fastest. The
// number of values is the product of the shape; an empty shape is one number.
type Array struct {
	Name  string // names the array in an NPZ file; not part of an NPY file
	Shape []int
	Data  []float64
}

// check returns an error if shape and data disagree.
func (a Array) check() error {
	n, err := volume(a.Shape)
	if err != nil {
		return err
	}
	if n != len(a.Data) {
		return fmt.Errorf("array of shape %v with %d values; want %d", a.Shape, len(a.Data), n)
	}
	return nil
}

// WriteNPY writes an array to an NPY file, format version 1.0.
func WriteNPY(path string, a Array) error {
	return Replace(path, func(w io.Writer) error { return encodeNPY(w, a) })
}

// ReadNPY reads an NPY file of any format version. The array has no name.
func ReadNPY(path string) (Array, error) {
	f, err := os.Open(path)
	if err != nil {
		return Array{}, fmt.Errorf("store: %w", err)
	}
	defer f.Close()
	size := int64(-1)
	if info, err := f.Stat(); err == nil && info.Mode().IsRegular() {
		size = info.Size()
	}
	a, err := decodeNPY(f, size)
	if err != nil {
		return Array{}, fmt.Errorf("store: %s: %w", path, err)
	}
	return a, nil
}

// EncodeNPY writes an array to w in the NPY format. It is an error if the length
// of the data is not the product of the shape.
func EncodeNPY(w io.Writer, a Array) error {
	if err := encodeNPY(w, a); err != nil {
		return fmt.Errorf("store: %w", err)
	}
	return nil
}

func encodeNPY(w io.Writer, a Array) error {
	if err := a.check(); err != nil {
		return err
	}
	if _, err := w.Write(header(a.Shape)); err != nil {
		return err
	}
	return writeFloats(w, a.Data)
}

// DecodeNPY reads one array in the NPY format from r, to its end. Memory grows
// with the bytes that arrive, whatever the header promises.
func DecodeNPY(r io.Reader) (Array, error) {
	a, err := decodeNPY(r, -1)
	if err != nil {
		return Array{}, fmt.Errorf("store: %w", err)
	}
	return a, nil
}

// decodeNPY reads an array from r. If size is not negative it is the number of
// bytes that r is known to hold.
func decodeNPY(r io.Reader, size int64) (Array, error) {
	shape, used, err := readHeader(r)
	if err != nil {
		return Array{}, err
	}
	n, err := volume(shape)
	if err != nil {
		return Array{}, err
	}
	room := min(n, chunk)
	if size >= 0 {
		if have := size - int64(used); have != 8*int64(n) {
			return Array{}, fmt.Errorf("%d bytes of data for the shape %v; want %d", have, shape, 8*int64(n))
		}
		room = n
	}
	data, err := readFloats(r, make([]float64, 0, room), n)
	if err != nil {
		return Array{}, fmt.Errorf("data of shape %v: %w", shape, err)
	}
	switch n, err := io.ReadFull(r, make([]byte, 1)); {
	case n > 0:
		return Array{}, fmt.Errorf("trailing bytes after the data of shape %v; want the file to end there", shape)
	case err != io.EOF:
		return Array{}, err
	}
	return Array{Shape: shape, Data: data}, nil
}

// chunk is how many values are moved at once.
const chunk = 1 << 13

func writeFloats(w io.Writer, data []float64) error {
	buf := make([]byte, 0, 8*min(len(data), chunk))
	for len(data) > 0 {
		part := data[:min(len(data), chunk)]
		buf = buf[:0]
		for _, x := range part {
			buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(x))
		}
		if _, err := w.Write(buf); err != nil {
			return err
		}
		data = data[len(part):]
	}
	return nil
}

// readFloats appends n values from r to data.
func readFloats(r io.Reader, data []float64, n int) ([]float64, error) {
	buf := make([]byte, 8*min(n, chunk))
	for len(data) < n {
		part := buf[:8*min(n-len(data), chunk)]
		got, err := io.ReadFull(r, part)
		if err == io.EOF || errors.Is(err, io.ErrUnexpectedEOF) {
			return nil, fmt.Errorf("truncated after %d bytes; want %d", 8*len(data)+got, 8*int64(n))
		}
		if err != nil {
			return nil, err
		}
		for ; len(part) > 0; part = part[8:] {
			data = append(data, math.Float64frombits(binary.LittleEndian.Uint64(part)))
		}
	}
	return data, nil
}
