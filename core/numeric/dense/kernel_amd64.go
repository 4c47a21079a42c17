//go:build !purego

package dense

import "golang.org/x/sys/cpu"

// level is the assembly in use.
type level int

const (
	plain level = iota // none
	avx2
	avx512
)

var (
	best = detect()
	// using is the level that Strip uses; tests try the lower ones too.
	using = best
)

func detect() level {
	switch x := &cpu.X86; {
	case x.HasAVX512F && x.HasBMI2:
		return avx512
	case x.HasAVX2 && x.HasFMA:
		return avx2
	}
	return plain
}

// stripFast is Strip in assembly. It returns false when there is none for this processor.
func stripFast(m, cols, depth int, a []float64, ars, acs int, b []float64, bs int, c []float64, ldc int) bool {
	switch using {
	case avx512:
		stripAVX512(m, cols, depth, &a[0], ars, acs, &b[0], bs, &c[0], ldc)
	case avx2:
		stripAVX2(m, cols, depth, &a[0], ars, acs, &b[0], bs, &c[0], ldc)
	default:
		return false
	}
	return true
}
