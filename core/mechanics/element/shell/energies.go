package shell

import (
	"hushframe/core/mechanics/element"
	"hushframe/core/mechanics/laminate"
)

// energies adds up the strain energy by kind of motion, six components per node, over the located
// element whose stiffness has been computed for section s.
func (k *kernel) energies(s *laminate.Section, motion, out []float64) {
	n := k.f.nodes
	var inner [maxInner]float64
	var turn [maxNodes]float64
	for a := range n {
		m := motion[element.NodeUnknowns*a:]
		for c := range 5 {
			i, sign := place(k.f.nodes, a, c)
			inner[i] = sign * m[c]
		}
		turn[a] = m[5]
	}
	b := k.inner - 2
	for j := range b {
		inner[b] -= k.bubble[0][j] * inner[j]
		inner[b+1] -= k.bubble[1][j] * inner[j]
	}
	clear(out)
	defl, fibre := k.deflStart(), k.fibreStart()
	drill := k.drillingStiffness(s)
	for p := range k.f.points {
		var eps, kap [3]float64
		spin := 0.0
		for a := range n + 1 {
			gx, gy := k.gx[p][a], k.gy[p][a]
			bx, by := inner[fibre+2*a], inner[fibre+2*a+1]
			kap[0] += gx * bx
			kap[1] += gy * by
			kap[2] += gy*bx + gx*by
			if a < n {
				u, v := inner[2*a], inner[2*a+1]
				eps[0] += gx * u
				eps[1] += gy * v
				eps[2] += gy*u + gx*v
				spin += k.f.points[p].value[a]*turn[a] + (gy*u-gx*v)/2
			}
		}
		var gam [2]float64
		for j := range 3*n + 2 {
			gam[0] += k.shear[p][0][j] * inner[defl+j]
			gam[1] += k.shear[p][1][j] * inner[defl+j]
		}
		w := k.area[p] / 2
		for i := range 3 {
			force, moment := 0.0, 0.0
			for j := range 3 {
				force += s.A[i][j]*eps[j] + s.B[i][j]*kap[j]
				moment += s.B[j][i]*eps[j] + s.D[i][j]*kap[j]
			}
			out[element.InPlane] += w * force * eps[i]
			if i < 2 {
				out[element.Bending] += w * moment * kap[i]
			} else {
				out[element.Twist] += w * moment * kap[i]
			}
		}
		out[element.InPlane] += w * drill * spin * spin
		for i := range 2 {
			out[element.Shear] += w * gam[i] * (s.Shear[i][0]*gam[0] + s.Shear[i][1]*gam[1])
		}
	}
}
