// The frame as solids: plates with their thickness, standoffs as tubes. One buffer, moved on the processor, since what
// is drawn is small and the same places serve for picking and for names.

import * as three from 'three'
import type { Frame } from '../data'
import type { Motion } from '../motion'
import { partColour } from '../palette'

const around = 10 // sides of a standoff

export class Solid {
  readonly mesh: three.Mesh<three.BufferGeometry, three.ShaderMaterial>
  readonly rims: three.LineSegments
  readonly geometry = new three.BufferGeometry()
  /** Displaced places of the nodes, m. */
  readonly places: Float32Array
  /** Part of each triangle of the geometry. */
  readonly partOf: Int32Array
  private normals: Float32Array
  private node: number[] = [] // of each vertex
  private offset: number[] = [] // plates: along the normal; tubes: 0
  private arm: number[] = [] // tubes: fixed offset, three of each vertex
  private vertexPart: number[] = []
  private plateTriangles: number[] = [] // of nodes, for normals
  private rimVertices: number[] = []
  private position: three.BufferAttribute
  private rimPosition: three.BufferAttribute
  private level: three.BufferAttribute
  private across: three.BufferAttribute
  private tint: three.BufferAttribute

  constructor(private frame: Frame, material: three.ShaderMaterial, rimMaterial: three.LineBasicMaterial) {
    const index: number[] = [], owner: number[] = []
    this.places = frame.nodes.slice()
    this.normals = new Float32Array(frame.nodes.length)
    frame.parts.forEach((part, p) => part.standoff ? this.tube(p, index, owner) : this.plate(p, index, owner))
    const count = this.node.length
    const buffer = (size: number) => new three.BufferAttribute(new Float32Array(size * count), size)
    this.position = buffer(3)
    this.level = buffer(1)
    this.across = buffer(1)
    this.tint = buffer(3)
    this.geometry.setAttribute('position', this.position)
    this.geometry.setAttribute('level', this.level)
    this.geometry.setAttribute('across', this.across)
    this.geometry.setAttribute('tint', this.tint)
    this.geometry.setIndex(index)
    this.partOf = Int32Array.from(owner)
    for (let v = 0; v < count; v++) this.tint.setXYZ(v, ...partColour(this.vertexPart[v]))
    this.mesh = new three.Mesh(this.geometry, material)
    this.mesh.frustumCulled = false
    const rims = new three.BufferGeometry()
    this.rimPosition = new three.BufferAttribute(new Float32Array(3 * this.rimVertices.length), 3)
    rims.setAttribute('position', this.rimPosition)
    this.rims = new three.LineSegments(rims, rimMaterial)
    this.rims.frustumCulled = false
    this.move(null, 0, 0)
    this.geometry.computeBoundingSphere()
  }

  private plate(p: number, index: number[], owner: number[]) {
    const part = this.frame.parts[p], vertex = new Map<number, number>(), half = part.thickness / 2
    const at = (n: number) => {
      let v = vertex.get(n)
      if (v === undefined) {
        v = this.node.length
        vertex.set(n, v)
        for (const side of [half, -half]) {
          this.node.push(n)
          this.offset.push(side)
          this.arm.push(0, 0, 0)
          this.vertexPart.push(p)
        }
      }
      return v
    }
    const face = (a: number, b: number, c: number) => { index.push(a, b, c); owner.push(p) }
    for (let i = 0; i < part.triangles.length; i += 3) {
      const n = [part.triangles[i], part.triangles[i + 1], part.triangles[i + 2]]
      const [a, b, c] = n.map(at)
      this.plateTriangles.push(...n)
      face(a, b, c)
      face(a + 1, c + 1, b + 1)
    }
    for (let i = 0; i < part.edges.length; i += 2) {
      const a = at(part.edges[i]), b = at(part.edges[i + 1])
      face(a, b, a + 1)
      face(b, b + 1, a + 1)
      this.rimVertices.push(a, b, a + 1, b + 1)
    }
  }

  private tube(p: number, index: number[], owner: number[]) {
    const part = this.frame.parts[p], ring = new Map<number, number>(), nodes = this.frame.nodes
    const axis = new three.Vector3(0, 0, 1)
    if (part.lines.length >= 2) {
      const [a, b] = [part.lines[0], part.lines[1]]
      axis.set(nodes[3 * b] - nodes[3 * a], nodes[3 * b + 1] - nodes[3 * a + 1], nodes[3 * b + 2] - nodes[3 * a + 2]).normalize()
    }
    const u = new three.Vector3(1, 0, 0)
    if (Math.abs(axis.x) > 0.9) u.set(0, 1, 0)
    u.cross(axis).normalize()
    const w = axis.clone().cross(u), r = (part.thickness || 0.005) / 2
    const at = (n: number) => {
      let v = ring.get(n)
      if (v === undefined) {
        v = this.node.length
        ring.set(n, v)
        for (let k = 0; k < around; k++) {
          const t = 2 * Math.PI * k / around, q = u.clone().multiplyScalar(r * Math.cos(t)).addScaledVector(w, r * Math.sin(t))
          this.node.push(n)
          this.offset.push(0)
          this.arm.push(q.x, q.y, q.z)
          this.vertexPart.push(p)
        }
      }
      return v
    }
    for (let i = 0; i < part.lines.length; i += 2) {
      const a = at(part.lines[i]), b = at(part.lines[i + 1])
      for (let k = 0; k < around; k++) {
        const l = (k + 1) % around
        index.push(a + k, a + l, b + k, a + l, b + l, b + k)
        owner.push(p, p)
      }
    }
  }

  /** Sets what does not change within a cycle: the envelope, and for a mode the motion across the plates. */
  dress(motion: Motion | null, density: Float32Array | null) {
    for (let v = 0; v < this.node.length; v++) {
      const level = density ? density[this.node[v]] : motion && motion.largest > 0 ? motion.envelope[this.node[v]] / motion.largest : 0
      this.level.array[v] = level
    }
    this.level.needsUpdate = true
    this.cross(motion, 1, 0)
  }

  /** The motion across each plate at an instant, over the largest displacement. */
  private cross(motion: Motion | null, cos: number, sin: number) {
    const out = this.across.array as Float32Array
    for (let v = 0; v < this.node.length; v++) {
      const a = 3 * this.node[v], normal = this.frame.parts[this.vertexPart[v]].normal
      let sum = 0
      if (motion && motion.largest > 0)
        for (let d = 0; d < 3; d++) sum += normal[d] * (motion.real[a + d] * cos - (motion.imaginary ? motion.imaginary[a + d] * sin : 0))
      out[v] = motion && motion.largest > 0 ? sum / motion.largest : 1
    }
    this.across.needsUpdate = true
  }

  /** Moves every vertex to an instant of the motion; scale enlarges displacements. */
  move(motion: Motion | null, scale: number, phase: number) {
    const cos = Math.cos(phase), sin = Math.sin(phase), x = this.frame.nodes, y = this.places
    if (motion) {
      const re = motion.real, im = motion.imaginary
      for (let k = 0; k < x.length; k++) y[k] = x[k] + scale * (re[k] * cos - (im ? im[k] * sin : 0))
      if (im) this.cross(motion, cos, sin)
    } else y.set(x)
    const nrm = this.normals.fill(0), t = this.plateTriangles
    for (let i = 0; i < t.length; i += 3) {
      const a = 3 * t[i], b = 3 * t[i + 1], c = 3 * t[i + 2]
      const ux = y[b] - y[a], uy = y[b + 1] - y[a + 1], uz = y[b + 2] - y[a + 2]
      const vx = y[c] - y[a], vy = y[c + 1] - y[a + 1], vz = y[c + 2] - y[a + 2]
      const nx = uy * vz - uz * vy, ny = uz * vx - ux * vz, nz = ux * vy - uy * vx
      nrm[a] += nx; nrm[a + 1] += ny; nrm[a + 2] += nz
      nrm[b] += nx; nrm[b + 1] += ny; nrm[b + 2] += nz
      nrm[c] += nx; nrm[c + 1] += ny; nrm[c + 2] += nz
    }
    const out = this.position.array as Float32Array
    for (let v = 0; v < this.node.length; v++) {
      const a = 3 * this.node[v], o = 3 * v, s = this.offset[v]
      let f = 0
      if (s !== 0) {
        const l = Math.hypot(nrm[a], nrm[a + 1], nrm[a + 2])
        f = l > 0 ? s / l : 0
      }
      out[o] = y[a] + f * nrm[a] + this.arm[o]
      out[o + 1] = y[a + 1] + f * nrm[a + 1] + this.arm[o + 1]
      out[o + 2] = y[a + 2] + f * nrm[a + 2] + this.arm[o + 2]
    }
    this.position.needsUpdate = true
    const rim = this.rimPosition.array as Float32Array
    this.rimVertices.forEach((v, i) => { rim[3 * i] = out[3 * v]; rim[3 * i + 1] = out[3 * v + 1]; rim[3 * i + 2] = out[3 * v + 2] })
    this.rimPosition.needsUpdate = true
  }

  dispose() {
    this.geometry.dispose()
    this.rims.geometry.dispose()
  }
}

/** The outline at rest as line segments. */
export function restOutline(frame: Frame): three.BufferGeometry {
  const out: number[] = []
  const add = (n: number, normal: ArrayLike<number>, h: number) => {
    for (let d = 0; d < 3; d++) out.push(frame.nodes[3 * n + d] + h * normal[d])
  }
  for (const part of frame.parts) {
    for (let i = 0; i < part.edges.length; i += 2)
      for (const h of [part.thickness / 2, -part.thickness / 2]) { add(part.edges[i], part.normal, h); add(part.edges[i + 1], part.normal, h) }
    for (let i = 0; i < part.lines.length; i += 2) { add(part.lines[i], part.normal, 0); add(part.lines[i + 1], part.normal, 0) }
  }
  const g = new three.BufferGeometry()
  g.setAttribute('position', new three.Float32BufferAttribute(out, 3))
  return g
}
