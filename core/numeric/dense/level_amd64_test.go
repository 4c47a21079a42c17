//go:build !purego

package dense

import "testing"

// eachLevel runs a test with each kernel that this processor can run, the one in Go included.
func eachLevel(t *testing.T, test func(t *testing.T, fused bool)) {
	defer func() { using = best }()
	for l, name := range []string{"plain", "AVX2", "AVX-512"} {
		if using = level(l); using > best {
			t.Logf("%s: not on this processor", name)
			break
		}
		t.Run(name, func(t *testing.T) { test(t, using > plain) })
	}
}
