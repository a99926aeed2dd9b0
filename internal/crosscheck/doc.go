// Package crosscheck holds the tests that need more floors of the library at
// once than any package may import: that what evolves forward in time and what
// is solved over the whole block are one action, and that no import arrow points
// up. It has no code of its own.
package crosscheck
