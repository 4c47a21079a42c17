// Motions of the frame as complex amplitudes: what moves is Re(u e^(+iφ)).

import type { Frame, Scene, Shapes } from './data'

/** The complex motion of every node and site drawn; imaginary parts are null for a mode. */
export interface Motion {
  real: Float32Array
  imaginary: Float32Array | null
  sitesReal: Float32Array // ux, uy, uz, rx, ry, rz of each site
  sitesImaginary: Float32Array | null
  /** The magnitude of the displacement of each node at its greatest, m. */
  envelope: Float32Array
  largest: number
}

/** Adds vectors of the basis with complex weights. */
export function superpose(frame: Frame, shapes: Shapes, real: ArrayLike<number>, imaginary: ArrayLike<number> | null): Motion {
  const n = frame.nodes.length, vectors = shapes.kinds.length, sites = frame.sites.length
  const add = (weights: ArrayLike<number>) => {
    const nodes = new Float32Array(n), at = new Float32Array(6 * sites)
    for (let v = 0; v < vectors; v++) {
      const w = weights[v], scaled = w * shapes.step[v], base = v * n
      if (!w) continue
      for (let k = 0; k < n; k++) nodes[k] += scaled * shapes.nodes[base + k]
      for (let s = 0; s < sites; s++)
        for (let d = 0; d < 6; d++) at[6 * s + d] += w * shapes.sites[6 * (s * vectors + v) + d]
    }
    return [nodes, at] as const
  }
  const [re, sitesRe] = add(real)
  const [im, sitesIm] = imaginary ? add(imaginary) : [null, null]
  return enclose(re, im, sitesRe, sitesIm)
}

/** Fills in the envelope: the semi-major axis of each node's path, an ellipse. */
export function enclose(real: Float32Array, imaginary: Float32Array | null, sitesReal: Float32Array, sitesImaginary: Float32Array | null): Motion {
  const nodes = real.length / 3, envelope = new Float32Array(nodes)
  let largest = 0
  for (let k = 0; k < nodes; k++) {
    const a = 3 * k
    let uu = 0, vv = 0, uv = 0
    for (let d = 0; d < 3; d++) {
      const u = real[a + d], v = imaginary ? imaginary[a + d] : 0
      uu += u * u
      vv += v * v
      uv += u * v
    }
    const e = Math.sqrt((uu + vv + Math.hypot(uu - vv, 2 * uv)) / 2)
    envelope[k] = e
    if (e > largest) largest = e
  }
  return { real, imaginary, sitesReal, sitesImaginary, envelope, largest }
}

/** The motion of a mode, with the sign that turns the gyro mostly the positive way. */
export function modeMotion(scene: Scene, number: number): Motion | null {
  const { frame, shapes } = scene, mode = scene.modes?.find(m => m.number === number)
  if (!frame || !shapes || !mode) return null
  const weights = new Float32Array(shapes.kinds.length)
  let main = 0
  for (let d = 1; d < 3; d++) if (Math.abs(mode.rotation[d]) > Math.abs(mode.rotation[main])) main = d
  weights[mode.vector] = mode.rotation[main] < 0 ? -1 : 1
  return superpose(frame, shapes, weights, null)
}

/** The motion at a frequency within the sweep, between the frequencies known by straight lines of the weights. */
export function operatingMotion(scene: Scene, frequency: number, axis: string): Motion | null {
  const { frame, shapes } = scene, operating = scene.operating.find(o => o.axis === axis)
  if (!frame || !shapes || !operating) return null
  const f = operating.frequency, n = shapes.kinds.length
  if (frequency < f[0] || frequency > f[f.length - 1]) return null
  let k = 0
  while (k < f.length - 2 && f[k + 1] < frequency) k++
  const t = f[k + 1] > f[k] ? (frequency - f[k]) / (f[k + 1] - f[k]) : 0
  const low = (1 - t) * operating.step[k], high = t * operating.step[k + 1]
  const mix = (x: Int16Array) => Float32Array.from({ length: n }, (_, v) => low * x[k * n + v] + high * x[(k + 1) * n + v])
  return superpose(frame, shapes, mix(operating.real), mix(operating.imaginary))
}
