// What the page embeds: the shapes of stages/report/scene, read from the page once.

export type Vec = [number, number, number]
export interface Share { name: string; share: number }

export interface Part {
  name: string; standoff: boolean; thickness: number; normal: Vec
  triangles: Int32Array; edges: Int32Array; lines: Int32Array
}
export interface Body { name: string; kind: string; site: number; centre: Vec; half: Vec; spin: number; mass: number }
export interface Site { name: string; kind: string; point: Vec }
export interface Frame { nodes: Float32Array; parts: Part[]; bodies: Body[]; sites: Site[]; centre?: Vec }
export interface Shapes { kinds: string[]; step: Float32Array; nodes: Int16Array; sites: Float32Array }
export interface Mode {
  number: number; vector: number; frequency: number; damping: number; about: string
  rotation: Vec; strength: Vec; strain: Share[]; kinds: Share[]; kinetic: Share[]
}
export interface Scene { light: string[]; dark: string[]; frame?: Frame; shapes?: Shapes; modes?: Mode[] }

function bytes(text: string): ArrayBuffer {
  const raw = atob(text), out = new Uint8Array(raw.length)
  for (let i = 0; i < raw.length; i++) out[i] = raw.charCodeAt(i)
  return out.buffer
}
const floats = (text: unknown) => new Float32Array(bytes(text as string))
const indices = (text: unknown) => new Int32Array(bytes(text as string))
const steps = (text: unknown) => new Int16Array(bytes(text as string))

/** Turns packed lists into typed arrays, in place. */
export function unpack(text: string): Scene {
  const x = JSON.parse(text)
  if (x.frame) {
    x.frame.nodes = floats(x.frame.nodes)
    x.frame.bodies ??= []
    x.frame.sites ??= []
    for (const p of x.frame.parts) {
      p.triangles = indices(p.triangles)
      p.edges = indices(p.edges)
      p.lines = indices(p.lines)
    }
  }
  if (x.shapes) {
    x.shapes.step = floats(x.shapes.step)
    x.shapes.nodes = steps(x.shapes.nodes)
    x.shapes.sites = floats(x.shapes.sites)
  }
  return x as Scene
}
