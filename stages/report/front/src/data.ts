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
/** Strain energy density of the plates at the nodes drawn, mode after mode, 255 for the greatest of each. */
export interface Density { modes: number[]; levels: Uint8Array }
/** How much of each vector moves at each frequency when the frame is driven: complex weights, frequency after frequency. */
export interface Operating { axis: string; frequency: Float32Array; step: Float32Array; real: Int16Array; imaginary: Int16Array }
export interface Scene { light: string[]; dark: string[]; frame?: Frame; shapes?: Shapes; modes?: Mode[]; charts: ChartData[]; density?: Density; operating: Operating[] }

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
  if (x.density) x.density.levels = new Uint8Array(bytes(x.density.levels))
  x.operating ??= []
  for (const o of x.operating) {
    for (const key of ['frequency', 'step']) o[key] = floats(o[key])
    for (const key of ['real', 'imaginary']) o[key] = steps(o[key])
  }
  x.charts ??= []
  x.charts.forEach(unpackChart)
  return x as Scene
}

export interface Axis { label: string; from: number; to: number; log?: boolean; either?: boolean }
export interface Curve { name: string; class: string; x: Float32Array; y: Float32Array; lower?: Float32Array; upper?: Float32Array }
export interface Band { from: number; to: number; label: string }
export interface Mark { x: number; label: string; mode?: number }
export interface Point { x: number; y: number; label?: string; class: string; about?: string }
export interface Grid { label: string; x: Float32Array; y: Float32Array; low: number; high: number; cells: Uint8Array }
export interface ChartData {
  id: string; title: string; about: string; x: Axis; y: Axis; grid?: Grid; bands: Band[]; curves: Curve[]; marks: Mark[]; points: Point[]
  notes: string[]; follow?: string; axis?: string; square?: boolean
}

function unpackChart(c: any) {
  for (const list of ['bands', 'curves', 'marks', 'points', 'notes']) c[list] ??= []
  for (const curve of c.curves)
    for (const key of ['x', 'y', 'lower', 'upper']) if (curve[key] !== undefined) curve[key] = floats(curve[key])
  if (c.grid) {
    c.grid.x = floats(c.grid.x)
    c.grid.y = floats(c.grid.y)
    c.grid.cells = new Uint8Array(bytes(c.grid.cells))
  }
}
