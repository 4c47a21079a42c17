//go:build !amd64 || purego

package dense

import "testing"

func eachLevel(t *testing.T, test func(t *testing.T, fused bool)) {
	t.Run("plain", func(t *testing.T) { test(t, false) })
}
