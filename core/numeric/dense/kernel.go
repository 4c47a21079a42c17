package dense

//go:generate go run -C gen . -out ../kernel_amd64.s -stubs ../kernel_stubs_amd64.go -pkg dense

// Columns is the width of a panel: the columns of C that Strip works on at a time.
const Columns = 8

// Strip computes C -= A·B for C of m by cols, A of m by depth and B of depth by cols, cols being at most eight. Entry
// (i, p) of A is at i*ars+p*acs, so that A may be stored either way; entry (p, j) of B is at p*bs+j, and entry (i, j) of C
// at i*ldc+j. Each entry of C takes its terms one after another in the order of p, whatever the shape.
func Strip(m, cols, depth int, a []float64, ars, acs int, b []float64, bs int, c []float64, ldc int) {
	if m <= 0 || cols <= 0 || depth <= 0 {
		return
	}
	// Whoever reads beyond an end, in assembly too, is told here.
	_ = a[(m-1)*ars+(depth-1)*acs]
	_ = b[(depth-1)*bs+cols-1]
	_ = c[(m-1)*ldc+cols-1]
	if !stripFast(m, cols, depth, a, ars, acs, b, bs, c, ldc) {
		stripPlain(m, cols, depth, a, ars, acs, b, bs, c, ldc)
	}
}

// stripPlain is Strip in Go: tiles of 3 by 2 results kept in registers, what is left row by row. Larger tiles would read
// less, but the compiler then keeps sums in memory, which costs a third of the speed.
func stripPlain(m, cols, depth int, a []float64, ars, acs int, b []float64, bs int, c []float64, ldc int) {
	i := 0
	for ; i+3 <= m; i += 3 {
		r0, r1, r2 := c[i*ldc:][:cols], c[(i+1)*ldc:][:cols], c[(i+2)*ldc:][:cols]
		j := 0
		for ; j+2 <= cols; j += 2 {
			s00, s01, s10, s11, s20, s21 := r0[j], r0[j+1], r1[j], r1[j+1], r2[j], r2[j+1]
			ia, ib := i*ars, j
			for range depth {
				x, y := b[ib], b[ib+1]
				v := a[ia]
				s00 -= v * x
				s01 -= v * y
				v = a[ia+ars]
				s10 -= v * x
				s11 -= v * y
				v = a[ia+2*ars]
				s20 -= v * x
				s21 -= v * y
				ia += acs
				ib += bs
			}
			r0[j], r0[j+1], r1[j], r1[j+1], r2[j], r2[j+1] = s00, s01, s10, s11, s20, s21
		}
		if j < cols {
			s0, s1, s2 := r0[j], r1[j], r2[j]
			ia, ib := i*ars, j
			for range depth {
				x := b[ib]
				s0 -= a[ia] * x
				s1 -= a[ia+ars] * x
				s2 -= a[ia+2*ars] * x
				ia += acs
				ib += bs
			}
			r0[j], r1[j], r2[j] = s0, s1, s2
		}
	}
	for ; i < m; i++ {
		row := c[i*ldc:][:cols]
		j := 0
		for ; j+4 <= cols; j += 4 {
			s0, s1, s2, s3 := row[j], row[j+1], row[j+2], row[j+3]
			ia, ib := i*ars, j
			for range depth {
				v, q := a[ia], b[ib:ib+4:ib+4]
				s0 -= v * q[0]
				s1 -= v * q[1]
				s2 -= v * q[2]
				s3 -= v * q[3]
				ia += acs
				ib += bs
			}
			row[j], row[j+1], row[j+2], row[j+3] = s0, s1, s2, s3
		}
		for ; j < cols; j++ {
			s := row[j]
			ia, ib := i*ars, j
			for range depth {
				s -= a[ia] * b[ib]
				ia += acs
				ib += bs
			}
			row[j] = s
		}
	}
}
