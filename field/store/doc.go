// Package store reads and writes the library's results: histories, states,
// tables and named numbers.
//
// # Formats
//
//	NPY   one array of float64            WriteNPY, WriteHistory, WriteState
//	NPZ   several named arrays            WriteNPZ, WriteHistoryNPZ
//	CSV   a table of float64 with a head  WriteTable
//	JSON  a list of named results         WriteResults
//
// NPY is the array format of NumPy's enhancement proposal NEP 1, little-endian
// float64 in C order; NPZ is a zip archive of NPY files. NumPy opens both with
// numpy.load, and arrays saved by numpy.save, numpy.savez and
// numpy.savez_compressed are read here if they are C-ordered '<f8'. Every float64
// comes back with the bits it had, NaNs included, except that CSV keeps no NaN
// payloads and JSON has null for every number that is not finite.
//
// # Histories and states
//
// A history is the array (slices, components, sites), a state the array
// (2, components, sites) with the field first and the rate second. A bare NPY
// file says nothing about where the array lies in space and time, so
// [ReadHistory] asks for the block. [WriteHistoryNPZ] keeps the block in the
// file as well, and [ReadHistoryNPZ] gives the history back whole.
// [HistoryWriter] writes a history slice by slice, with one slice in memory.
//
// Values that are not finite are stored like any other: the last slices of a run
// that blew up are worth keeping.
//
// # What a file can do wrong
//
// Readers trust nothing. A wrong magic string, another dtype, Fortran order, a
// shape that does not fit the number of bytes, missing or trailing bytes: each is
// an error that names the file, says what was found and what would be right. No
// memory is set aside for a shape before the bytes are seen to be there.
//
// # Nothing lost
//
// Every file is written under a temporary name in its own folder, synced, and
// renamed over the old one; see [Replace]. A write that fails leaves the old file
// as it was and no temporary file.
package store
