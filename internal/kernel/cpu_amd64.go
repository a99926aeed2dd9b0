//go:build amd64 && !noasm

package kernel

// cpuid executes the CPUID instruction.
//
//go:noescape
func cpuid(leaf, sub uint32) (eax, ebx, ecx, edx uint32)

// xgetbv reads the low half of extended control register 0, which says what
// registers the operating system saves.
func xgetbv() (eax uint32)

// fastest returns the widest path that processor and operating system offer.
// Twenty lines here spare users of the library a dependency.
func fastest() path {
	const (
		// leaf 1, ECX
		fma     = 1 << 12
		osxsave = 1 << 27
		avx     = 1 << 28
		// leaf 7, EBX
		hasAVX2  = 1 << 5
		bmi2     = 1 << 8
		avx512f  = 1 << 16
		ymm, zmm = 0x06, 0xe6 // XCR0
	)
	last, _, _, _ := cpuid(0, 0)
	if last < 7 {
		return portable
	}
	_, _, c, _ := cpuid(1, 0)
	if want := uint32(fma | osxsave | avx); c&want != want {
		return portable
	}
	_, b, _, _ := cpuid(7, 0)
	saved := xgetbv()
	if want := uint32(hasAVX2 | bmi2); b&want != want || saved&ymm != ymm {
		return portable
	}
	if b&avx512f == 0 || saved&zmm != zmm {
		return avx2
	}
	return avx512
}
