//go:build linux

package nested

import (
	"syscall"
	"unsafe"
)

// reserve returns n zeros. It asks Linux to back them by large pages: touching
// gigabytes of fresh memory four kibibytes at a time takes longer than the
// arithmetic. This is advice only, so a refusal is of no interest.
func reserve(n int) []float64 {
	x := make([]float64, n)
	const page = 2 << 20
	if size := 8 * n; size >= 2*page {
		p := unsafe.Pointer(unsafe.SliceData(x))
		skip := int(-uintptr(p) & (page - 1))
		b := unsafe.Slice((*byte)(unsafe.Add(p, skip)), (size-skip)&^(page-1))
		_ = syscall.Madvise(b, syscall.MADV_HUGEPAGE)
	}
	return x
}
