package nested

import "testing"

// FuzzLDLT compares random small systems with a dense eigenvalue solver.
func FuzzLDLT(f *testing.F) {
	f.Add(uint64(1), uint8(5), uint8(7), uint8(0x11), uint8(0), uint8(0), uint8(0))
	f.Add(uint64(2), uint8(0), uint8(0), uint8(0), uint8(0), uint8(3), uint8(1))
	f.Add(uint64(3), uint8(11), uint8(2), uint8(0x62), uint8(90), uint8(7), uint8(6))
	f.Add(uint64(4), uint8(8), uint8(8), uint8(0x20), uint8(200), uint8(14), uint8(9))
	f.Add(uint64(5), uint8(23), uint8(10), uint8(0x33), uint8(30), uint8(1), uint8(15))
	// Five zero eigenvalues and one of 1e-13‖A‖, which is known to three digits.
	f.Add(uint64(17), uint8(68), uint8(128), uint8(0x11), uint8(143), uint8(9), uint8(0x25))
	f.Fuzz(func(t *testing.T, seed uint64, rows, cols, reach, missing, last, flags uint8) {
		c := recipe{
			seed: seed, rows: rows, cols: cols, reachRow: reach & 15, reachCol: reach >> 4,
			components: last >> 4, missing: missing, last: last & 3,
			wrapRow: flags&1 != 0, wrapCol: flags&2 != 0, zeroCorner: flags&4 != 0, definite: flags&8 != 0,
		}
		sys, values := c.build()
		if sys.N > 200 {
			return
		}
		compareIndefinite(t, c, sys, values, 1+int(flags>>4)%4)
	})
}
