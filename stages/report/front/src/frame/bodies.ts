// What rides on the frame: bodies as boxes, rotors as drums, and the turning of the gyro.

import * as three from 'three'
import type { Frame } from '../data'
import type { Motion } from '../motion'

/** Translation and rotation of a site at an instant. */
function rigid(motion: Motion | null, site: number, scale: number, phase: number, move: three.Vector3, turn: three.Vector3) {
  if (!motion || site < 0) {
    move.set(0, 0, 0)
    turn.set(0, 0, 0)
    return
  }
  const cos = scale * Math.cos(phase), sin = scale * Math.sin(phase), a = 6 * site, re = motion.sitesReal, im = motion.sitesImaginary
  const q = (d: number) => re[a + d] * cos - (im ? im[a + d] * sin : 0)
  move.set(q(0), q(1), q(2))
  turn.set(q(3), q(4), q(5))
}

export class Bodies {
  readonly group = new three.Group()
  private items: { node: three.Group; site: number; point: three.Vector3 }[] = []
  constructor(frame: Frame, fill: three.Material, line: three.LineBasicMaterial) {
    for (const b of frame.bodies) {
      const shape = b.kind === 'rotor'
        ? new three.CylinderGeometry(b.half[0], b.half[0], Math.max(2 * b.half[2], 0.001), 36).rotateX(Math.PI / 2)
        : new three.BoxGeometry(2 * b.half[0], 2 * b.half[1], 2 * b.half[2])
      const point = new three.Vector3(...(b.site >= 0 ? frame.sites[b.site].point : b.centre))
      const node = new three.Group()
      const at = new three.Vector3(...b.centre).sub(point)
      const solid = new three.Mesh(shape, fill)
      solid.position.copy(at)
      solid.name = `${b.kind} ${b.name}`
      const edges = new three.LineSegments(new three.EdgesGeometry(shape, 25), line)
      edges.position.copy(at)
      node.add(solid, edges)
      node.position.copy(point)
      this.group.add(node)
      this.items.push({ node, site: b.site, point })
    }
  }
  private move_ = new three.Vector3()
  private turn_ = new three.Vector3()
  move(motion: Motion | null, scale: number, phase: number) {
    for (const x of this.items) {
      rigid(motion, x.site, scale, phase, this.move_, this.turn_)
      x.node.position.copy(x.point).add(this.move_)
      const angle = this.turn_.length()
      if (angle > 0) x.node.quaternion.setFromAxisAngle(this.turn_.divideScalar(angle), angle)
      else x.node.quaternion.identity()
    }
  }
}

export const axisNames = ['roll', 'pitch', 'yaw'] as const

/** Three arrows at the gyro, as long as it turns about each axis: forward for roll, left for pitch, up for yaw. */
export class Triad {
  readonly group = new three.Group()
  /** Where the words go, in the frame's axes, and how long each arrow gets, 0 to 1. */
  readonly tips = [new three.Vector3(), new three.Vector3(), new three.Vector3()]
  readonly shares = [0, 0, 0]
  readonly site: number
  private arrows: { shaft: three.Mesh; head: three.Mesh; track: three.Line }[] = []
  private length: number
  constructor(private frame: Frame, span: number, private colours: three.MeshBasicMaterial[], track: three.LineBasicMaterial) {
    this.length = 0.3 * span
    this.site = frame.sites.findIndex(s => s.kind === 'gyro')
    const r = 0.0065 * span
    for (let d = 0; d < 3; d++) {
      const shaft = new three.Mesh(new three.CylinderGeometry(r, r, 1, 12).translate(0, 0.5, 0), this.colours[d])
      const head = new three.Mesh(new three.ConeGeometry(3 * r, 9 * r, 16), this.colours[d])
      const axis = new three.Vector3().setComponent(d, 1)
      const line = new three.Line(new three.BufferGeometry().setFromPoints([axis.clone().negate(), axis]), track)
      for (const m of [shaft, head, line]) m.renderOrder = 10
      this.arrows.push({ shaft, head, track: line })
      this.group.add(shaft, head, line)
    }
  }
  /** Arrows for an instant; nothing is shown where the gyro hardly turns. */
  move(motion: Motion | null, scale: number, phase: number, span: number) {
    this.group.visible = false
    if (!motion || this.site < 0) return
    const a = 6 * this.site, re = motion.sitesReal, im = motion.sitesImaginary, cos = Math.cos(phase), sin = Math.sin(phase)
    const most = [3, 4, 5].map(d => Math.hypot(re[a + d], im ? im[a + d] : 0)), top = Math.max(...most)
    if (!(top * span > 2e-3 * motion.largest)) return
    this.group.visible = true
    const move = new three.Vector3(), turn = new three.Vector3()
    rigid(motion, this.site, scale, phase, move, turn)
    this.group.position.set(...this.frame.sites[this.site].point).add(move)
    const up = new three.Vector3(0, 1, 0)
    for (let d = 0; d < 3; d++) {
      const now = (re[a + 3 + d] * cos - (im ? im[a + 3 + d] * sin : 0)) / top, reach = now * this.length
      const axis = new three.Vector3().setComponent(d, Math.sign(reach) || 1), q = new three.Quaternion().setFromUnitVectors(up, axis)
      const { shaft, head, track } = this.arrows[d]
      this.shares[d] = most[d] / top
      const seen = most[d] > 0.02 * top
      shaft.visible = head.visible = seen && Math.abs(now) > 0.01
      track.visible = seen
      shaft.quaternion.copy(q)
      shaft.scale.set(1, Math.max(1e-6, Math.abs(reach)), 1)
      head.quaternion.copy(q)
      const s = Math.min(1, 0.35 + Math.abs(now))
      head.scale.setScalar(s)
      head.position.copy(axis).multiplyScalar(Math.abs(reach))
      track.scale.setScalar(most[d] / top * this.length)
      this.tips[d].setScalar(0).setComponent(d, most[d] / top * this.length * 1.12).add(this.group.position)
    }
  }
}
