//go:build amd64 && !noasm

package nested

// features reads the processor's capabilities: word EBX of CPUID leaf 7, word
// ECX of leaf 1, and the low half of the extended control register 0, which
// says which vector registers the operating system saves. All are zero on a
// processor too old to have leaf 7.
//
//go:noescape
func features() (ebx7, ecx1, xcr0 uint32)

//go:noescape
func tile8x16AVX512(k int, a, b, c *float64, ldc int)

//go:noescape
func tile4x8AVX2(k int, a, b, c *float64, ldc int)

//go:noescape
func tile1x16AVX2(k int, a, b, c *float64)

//go:noescape
func solve16AVX2(n int, u, inv, x *float64)

// level is what the processor offers to the kernels.
type level int

const (
	plain  level = iota // neither AVX2 nor fused multiply-add
	avx2                // AVX2 and fused multiply-add
	avx512              // AVX-512F besides
)

var processor = detect()

func detect() level {
	ebx7, ecx1, xcr0 := features()
	const (
		fma     = 1 << 12 // in ecx1
		hasAVX2 = 1 << 5  // in ebx7
		hasF    = 1 << 16 // in ebx7
		ymm     = 0x06    // in xcr0
		zmm     = 0xe6    // in xcr0
	)
	switch {
	case ecx1&fma == 0 || ebx7&hasAVX2 == 0 || xcr0&ymm != ymm:
		return plain
	case ebx7&hasF == 0 || xcr0&zmm != zmm:
		return avx2
	}
	return avx512
}

func tile8x16(k int, a, b, c []float64, ldc int) {
	if k == 0 {
		return
	}
	_, _, _ = a[16*(k-1)+7], b[16*(k-1)+15], c[7*ldc+15]
	switch processor {
	case avx512:
		tile8x16AVX512(k, &a[0], &b[0], &c[0], ldc)
	case avx2:
		for i := 0; i < 8; i += 4 {
			for j := 0; j < 16; j += 8 {
				tile4x8AVX2(k, &a[i], &b[j], &c[i*ldc+j], ldc)
			}
		}
	default:
		portableTile8x16(k, a, b, c, ldc)
	}
}

func tile1x16(k int, a, b, c []float64) {
	if k == 0 {
		return
	}
	_, _, _ = a[16*(k-1)], b[16*(k-1)+15], c[15]
	if processor == plain {
		portableTile1x16(k, a, b, c)
		return
	}
	tile1x16AVX2(k, &a[0], &b[0], &c[0])
}

func solve16(n int, u []float64, inv *[16]float64, x []float64) {
	if n == 0 {
		return
	}
	_, _ = u[16*(n-1)+n-1], x[16*(n-1)+15]
	if processor == plain {
		portableSolve16(n, u, inv, x)
		return
	}
	solve16AVX2(n, &u[0], &inv[0], &x[0])
}
