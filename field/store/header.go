package store

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
)

// An NPY file starts with the magic string, two bytes of version, the length of
// the header (two bytes in version 1.0, four in 2.0 and 3.0, little-endian), and
// the header: a Python dictionary padded with spaces, ending in a newline.
const (
	magic      = "\x93NUMPY"
	maxHeader  = 1 << 16 // a strict header of float64 needs far less
	maxRank    = 32
	alignment  = 64 // the data starts at a multiple of it
	growDigits = 21 // room for the first number of the shape to grow, as NumPy leaves
)

// header returns everything that stands before the data of an array. Its length
// is the same for all sizes of the first axis.
func header(shape []int) []byte {
	var dict strings.Builder
	dict.WriteString("{'descr': '<f8', 'fortran_order': False, 'shape': (")
	for i, n := range shape {
		if i > 0 {
			dict.WriteString(", ")
		}
		dict.WriteString(strconv.Itoa(n))
	}
	if len(shape) == 1 {
		dict.WriteString(",")
	}
	dict.WriteString("), }")
	if len(shape) > 0 {
		dict.WriteString(strings.Repeat(" ", growDigits-len(strconv.Itoa(shape[0]))))
	}
	const before = len(magic) + 4
	gap := alignment - (before+dict.Len()+1)%alignment
	length := dict.Len() + gap%alignment + 1

	b := append([]byte(magic), 1, 0)
	b = binary.LittleEndian.AppendUint16(b, uint16(length))
	b = append(b, dict.String()...)
	for len(b) < before+length-1 {
		b = append(b, ' ')
	}
	return append(b, '\n')
}

// readHeader reads up to the first byte of the data and returns the shape and the
// number of bytes read.
func readHeader(r io.Reader) (shape []int, used int, err error) {
	start := make([]byte, len(magic)+2, len(magic)+6)
	if n, err := io.ReadFull(r, start); err != nil {
		return nil, 0, fmt.Errorf("only %d bytes; want an NPY file, which starts with %q and a version", n, magic)
	}
	if string(start[:len(magic)]) != magic {
		return nil, 0, fmt.Errorf("starts with %q; want an NPY file, which starts with %q", start[:len(magic)], magic)
	}
	major, minor := start[len(magic)], start[len(magic)+1]
	width := 4
	switch {
	case major == 1 && minor == 0:
		width = 2
	case (major == 2 || major == 3) && minor == 0:
	default:
		return nil, 0, fmt.Errorf("NPY version %d.%d; want 1.0, 2.0 or 3.0", major, minor)
	}
	size := make([]byte, 4)
	if _, err := io.ReadFull(r, size[:width]); err != nil {
		return nil, 0, fmt.Errorf("truncated in the length of the NPY header")
	}
	length := int64(binary.LittleEndian.Uint32(size))
	if length > maxHeader {
		return nil, 0, fmt.Errorf("NPY header of %d bytes; want at most %d", length, maxHeader)
	}
	text := make([]byte, length)
	if n, err := io.ReadFull(r, text); err != nil {
		return nil, 0, fmt.Errorf("truncated after %d bytes of an NPY header of %d", n, length)
	}
	shape, err = parseHeader(string(text))
	if err != nil {
		return nil, 0, err
	}
	return shape, len(start) + width + len(text), nil
}

// parseHeader reads the dictionary of the header: the three keys, each once and in
// any order.
func parseHeader(text string) ([]int, error) {
	body, ok := strings.CutSuffix(text, "\n")
	if !ok {
		return nil, fmt.Errorf("NPY header does not end in a newline")
	}
	s := scanner{text: body}
	s.want('{')
	var shape []int
	seen := map[string]bool{}
	for s.err == nil && !s.have('}') {
		key := s.quoted()
		s.want(':')
		if seen[key] {
			s.fail("NPY header has the key %q twice", key)
		}
		seen[key] = true
		switch key {
		case "descr":
			s.dtype()
		case "fortran_order":
			s.order()
		case "shape":
			shape = s.tuple()
		default:
			s.fail("NPY header has the unknown key %q; want descr, fortran_order and shape", key)
		}
		if !s.have(',') {
			s.want('}')
			break
		}
	}
	if s.space(); s.err == nil && s.at < len(s.text) {
		s.fail("NPY header goes on after its dictionary with %q", s.ahead())
	}
	for _, key := range []string{"descr", "fortran_order", "shape"} {
		if s.err == nil && !seen[key] {
			s.fail("NPY header lacks the key %q", key)
		}
	}
	return shape, s.err
}

// A scanner walks over the header and keeps the first error.
type scanner struct {
	text string
	at   int
	err  error
}

func (s *scanner) fail(format string, args ...any) {
	if s.err == nil {
		s.err = fmt.Errorf(format, args...)
	}
}

// ahead returns a short piece of what is left, for messages.
func (s *scanner) ahead() string {
	rest := s.text[s.at:]
	return rest[:min(len(rest), 12)]
}

func (s *scanner) space() {
	for s.at < len(s.text) && s.text[s.at] == ' ' {
		s.at++
	}
}

// have steps over the byte c if it comes next.
func (s *scanner) have(c byte) bool {
	s.space()
	if s.err == nil && s.at < len(s.text) && s.text[s.at] == c {
		s.at++
		return true
	}
	return false
}

func (s *scanner) want(c byte) {
	if !s.have(c) {
		s.fail("NPY header has %q at byte %d; want %q", s.ahead(), s.at, c)
	}
}

func (s *scanner) quoted() string {
	quote := byte('\'')
	if !s.have(quote) {
		quote = '"'
		s.want(quote)
	}
	n := strings.IndexByte(s.text[s.at:], quote)
	if s.err != nil || n < 0 {
		s.fail("NPY header has a string without end at byte %d", s.at)
		return ""
	}
	word := s.text[s.at : s.at+n]
	s.at += n + 1
	return word
}

func (s *scanner) dtype() {
	s.space()
	if strings.HasPrefix(s.text[s.at:], "[") {
		s.fail("array of records; want dtype '<f8' (little-endian float64)")
		return
	}
	if d := s.quoted(); d != "<f8" {
		s.fail("array of dtype '%s'; want '<f8' (little-endian float64)", d)
	}
}

func (s *scanner) order() {
	s.space()
	switch rest := s.text[s.at:]; {
	case strings.HasPrefix(rest, "False"):
		s.at += len("False")
	case strings.HasPrefix(rest, "True"):
		s.fail("array in Fortran order; want C order (save numpy.ascontiguousarray of it)")
	default:
		s.fail("NPY header has fortran_order %q; want False", s.ahead())
	}
}

func (s *scanner) tuple() []int {
	s.want('(')
	var shape []int
	for s.err == nil && !s.have(')') {
		s.space()
		from := s.at
		for s.at < len(s.text) && '0' <= s.text[s.at] && s.text[s.at] <= '9' {
			s.at++
		}
		n, err := strconv.Atoi(s.text[from:s.at])
		if err != nil {
			s.at = from
			s.fail("NPY header has %q in its shape; want whole numbers ≥ 0 that fit in an int", s.ahead())
			break
		}
		shape = append(shape, n)
		if comma := s.have(','); !comma {
			if len(shape) == 1 {
				s.fail("NPY header has the shape (%d); want a tuple, (%d,)", n, n)
			}
			s.want(')')
			break
		}
	}
	return shape
}

// volume returns the product of the shape.
func volume(shape []int) (int, error) {
	if len(shape) > maxRank {
		return 0, fmt.Errorf("array of %d dimensions; want at most %d", len(shape), maxRank)
	}
	n, empty := 1, false
	for _, d := range shape {
		switch {
		case d < 0:
			return 0, fmt.Errorf("shape %v has the length %d; want lengths ≥ 0", shape, d)
		case d == 0:
			empty = true
		case n > math.MaxInt/8/d:
			return 0, fmt.Errorf("shape %v is too large: its bytes cannot be counted", shape)
		default:
			n *= d
		}
	}
	if empty {
		return 0, nil
	}
	return n, nil
}
