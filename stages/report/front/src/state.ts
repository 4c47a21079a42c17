// What the reader has chosen. Everything that shows it listens here, so that charts, tables and the frame stay as one.

export type Chosen =
  | { kind: 'rest' }
  | { kind: 'mode'; number: number }
  | { kind: 'frequency'; frequency: number; axis: string }

export type Colouring = 'displacement' | 'strain' | 'part'

export interface Choices {
  shown: Chosen
  beside: number[] // modes played side by side; fewer than two: only what is shown
  playing: boolean
  amplitude: number // largest displacement drawn, as a share of the span of the frame
  speed: number // cycles per second on screen
  colouring: Colouring
  rest: boolean
  nodeLines: boolean
  names: boolean
  gyro: boolean
}

type Listener = (now: Choices, before: Choices) => void

export class State {
  private listeners: Listener[] = []
  now: Choices
  constructor(reduced: boolean) {
    this.now = {
      shown: { kind: 'rest' }, beside: [], playing: !reduced, amplitude: 0.07, speed: 0.7, colouring: 'displacement',
      rest: true, nodeLines: true, names: false, gyro: true,
    }
  }
  listen(f: Listener) { this.listeners.push(f) }
  set(change: Partial<Choices>) {
    const before = this.now
    this.now = { ...before, ...change }
    for (const f of this.listeners) f(this.now, before)
  }
}
