// Command gen writes the assembly of package dense: one kernel, for AVX2 and for AVX-512.
package main

import (
	"fmt"

	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

const columns = 8 // of a panel

func main() {
	ConstraintExpr("!purego")
	generate(avx2)
	generate(avx512)
	Generate()
}

// machine is an instruction set: how many rows of a tile fit its registers, and how a row is held.
type machine struct {
	name string
	rows int
	wide bool // a row is one register of eight numbers instead of two of four
}

var (
	avx2   = machine{"AVX2", 6, false}
	avx512 = machine{"AVX512", 12, true}
)

// strides are the registers that all tiles share; strides in bytes.
type strides struct {
	m, a, ars, acs, bs, c, ldc reg.GPVirtual
	mask                       reg.Register  // of the columns in use, AVX-512
	table                      reg.GPVirtual // where it is in memory, AVX2: there is no register left for it
}

// generate writes the function that takes whole tiles of rows, and then one smaller tile for what is left.
func generate(x machine) {
	TEXT("strip"+x.name, NOSPLIT, "func(m, cols, depth int, a *float64, ars, acs int, b *float64, bs int, c *float64, ldc int)")
	Doc("strip" + x.name + " computes C -= A·B for C of m by cols ≤ 8; see Strip.")
	Pragma("noescape")
	s := strides{}
	load := func(name string) reg.GPVirtual { return Load(Param(name), GP64()).(reg.GPVirtual) }
	s.m, s.a, s.ars, s.acs, s.bs, s.c, s.ldc = load("m"), load("a"), load("ars"), load("acs"), load("bs"), load("c"), load("ldc")
	for _, r := range []reg.GPVirtual{s.ars, s.acs, s.bs, s.ldc} {
		SHLQ(Imm(3), r)
	}
	cols := GP64()
	Load(Param("cols"), cols)
	CMPQ(cols, Imm(columns))
	JE(LabelRef("full"))
	if x.wide {
		ones, k := GP64(), K()
		MOVQ(I32(-1), ones)
		BZHIQ(cols, ones, ones)
		KMOVW(ones.As32(), k)
		s.mask = k
	} else {
		Comment("Masks start at the number of unused columns in a run of ones and zeros.")
		NEGQ(cols)
		s.table = GP64()
		LEAQ(maskTable(), s.table)
		LEAQ(Mem{Base: s.table, Index: cols, Scale: 8, Disp: 64}, s.table)
	}
	x.tiles(&s, true, "part")
	Label("full")
	x.tiles(&s, false, "full")
}

// maskTable is eight words of ones followed by eight of zeros.
func maskTable() Mem {
	t := GLOBL("masks", RODATA|NOPTR)
	for i := range 16 {
		v := uint64(0)
		if i < 8 {
			v = ^v
		}
		DATA(8*i, U64(v))
	}
	return t
}

// tiles loops over the rows.
func (x machine) tiles(s *strides, masked bool, prefix string) {
	Label(prefix + "next")
	CMPQ(s.m, Imm(uint64(x.rows)))
	JL(LabelRef(prefix + "rest"))
	x.tile(s, x.rows, masked, prefix)
	SUBQ(Imm(uint64(x.rows)), s.m)
	three := GP64()
	for _, move := range [][2]reg.GPVirtual{{s.ars, s.a}, {s.ldc, s.c}} {
		LEAQ(Mem{Base: move[0], Index: move[0], Scale: 2}, three)
		LEAQ(Mem{Base: move[1], Index: three, Scale: uint8(x.rows / 3)}, move[1])
	}
	JMP(LabelRef(prefix + "next"))
	Label(prefix + "rest")
	for rows := x.rows - 1; rows > 0; rows-- {
		CMPQ(s.m, Imm(uint64(rows)))
		JNE(LabelRef(fmt.Sprintf("%sskip%d", prefix, rows)))
		x.tile(s, rows, masked, prefix+"tail")
		JMP(LabelRef(prefix + "done"))
		Label(fmt.Sprintf("%sskip%d", prefix, rows))
	}
	Label(prefix + "done")
	VZEROUPPER()
	RET()
}

// tile subtracts the product from one tile, kept in registers while the inner index runs.
func (x machine) tile(s *strides, rows int, masked bool, prefix string) {
	pointers := make([]reg.GPVirtual, (rows+2)/3)
	for k := range pointers {
		pointers[k] = GP64()
	}
	aim := func(base, stride reg.GPVirtual) {
		MOVQ(base, pointers[0])
		for k := 1; k < len(pointers); k++ {
			LEAQ(Mem{Base: pointers[k-1], Index: stride, Scale: 2}, pointers[k])
			ADDQ(stride, pointers[k])
		}
	}
	at := func(row int, stride reg.GPVirtual) Mem {
		m := Mem{Base: pointers[row/3]}
		if row%3 > 0 {
			m.Index, m.Scale = stride, uint8(row%3)
		}
		return m
	}
	vectors := 2
	if x.wide {
		vectors = 1
	}
	sums := make([][]reg.VecVirtual, rows)
	aim(s.c, s.ldc)
	for r := range rows {
		for v := range vectors {
			sums[r] = append(sums[r], x.fetch(s, at(r, s.ldc).Offset(32*v), v, masked))
		}
	}
	aim(s.a, s.ars)
	b, count := GP64(), GP64()
	Load(Param("b"), b)
	Load(Param("depth"), count)
	loop := fmt.Sprintf("%sloop%d", prefix, rows)
	Label(loop)
	var factors []reg.VecVirtual
	for v := range vectors {
		factors = append(factors, x.fetch(s, Mem{Base: b, Disp: 32 * v}, v, masked))
	}
	for r := range rows {
		if x.wide {
			VFNMADD231PD_BCST(at(r, s.ars), factors[0], sums[r][0])
			continue
		}
		value := YMM()
		VBROADCASTSD(at(r, s.ars), value)
		VFNMADD231PD(factors[0], value, sums[r][0])
		VFNMADD231PD(factors[1], value, sums[r][1])
	}
	for _, p := range pointers {
		ADDQ(s.acs, p)
	}
	ADDQ(s.bs, b)
	DECQ(count)
	JNZ(LabelRef(loop))
	aim(s.c, s.ldc)
	for r := range rows {
		for v := range vectors {
			x.store(s, sums[r][v], at(r, s.ldc).Offset(32*v), v, masked)
		}
	}
}

func (x machine) fetch(s *strides, from Mem, v int, masked bool) reg.VecVirtual {
	to := YMM()
	if x.wide {
		to = ZMM()
	}
	switch {
	case !masked:
		VMOVUPD(from, to)
	case x.wide:
		VMOVUPD_Z(from, s.mask, to)
	default:
		VMASKMOVPD(from, s.loadMask(v), to)
	}
	return to
}

func (s *strides) loadMask(v int) reg.VecVirtual {
	mask := YMM()
	VMOVUPD(Mem{Base: s.table, Disp: 32 * v}, mask)
	return mask
}

func (x machine) store(s *strides, z reg.VecVirtual, to Mem, v int, masked bool) {
	switch {
	case !masked:
		VMOVUPD(z, to) // one with a mask would hold up a load that follows
	case x.wide:
		VMOVUPD(z, s.mask, to)
	default:
		VMASKMOVPD(z, s.loadMask(v), to)
	}
}
