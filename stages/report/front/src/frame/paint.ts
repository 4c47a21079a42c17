// How surfaces look: one shader for plates, tubes and bodies.

import * as three from 'three'

const vertex = `
attribute float level;
attribute float across;
attribute vec3 tint;
varying vec3 seen;
varying float share;
varying float over;
varying vec3 own;
void main() {
  vec4 p = modelViewMatrix * vec4(position, 1.0);
  seen = p.xyz;
  share = level;
  over = across;
  own = tint;
  gl_Position = projectionMatrix * p;
}`

// The normal comes from how places change over the screen, so that it is right however the frame bends.
const fragment = `
uniform sampler2D ramp;
uniform int colouring; // 0 from the ramp, 1 by part, 2 plain
uniform bool lines;
uniform vec3 ink;
uniform vec3 plain;
uniform float opacity;
uniform float span;
varying vec3 seen;
varying float share;
varying float over;
varying vec3 own;
void main() {
  vec3 dx = dFdx(seen), dy = dFdy(seen);
  vec3 n = normalize(cross(dx, dy));
  float light = 0.62 + 0.30 * max(0.0, dot(n, normalize(vec3(-0.35, 0.65, 0.7)))) + 0.14 * max(0.0, n.z);
  vec3 base = colouring == 0 ? texture2D(ramp, vec2(clamp(share, 0.002, 0.998), 0.5)).rgb : colouring == 1 ? own : plain;
  vec3 c = base * light;
  if (lines) {
    float w = fwidth(over);
    float slope = w * span / max(1e-9, length(dx) + length(dy)); // change over the span of the frame
    float line = (1.0 - smoothstep(0.7, 1.7, abs(over) / max(w, 1e-9))) * smoothstep(0.05, 0.2, slope);
    c = mix(c, ink, 0.9 * line);
  }
  gl_FragColor = vec4(c, opacity);
}`

export function surface(ramp: three.Texture, span: number): three.ShaderMaterial {
  return new three.ShaderMaterial({
    vertexShader: vertex, fragmentShader: fragment, side: three.DoubleSide,
    uniforms: {
      ramp: { value: ramp }, colouring: { value: 0 }, lines: { value: true }, ink: { value: new three.Color(0, 0, 0) },
      plain: { value: new three.Color(0.6, 0.6, 0.6) }, opacity: { value: 1 }, span: { value: span },
    },
    polygonOffset: true, polygonOffsetFactor: 1, polygonOffsetUnits: 1,
  })
}

/** A plain see-through surface for bodies. */
export function glass(opacity: number): three.ShaderMaterial {
  const m = surface(new three.Texture(), 1)
  m.uniforms.colouring.value = 2
  m.uniforms.lines.value = false
  m.uniforms.opacity.value = opacity
  m.transparent = true
  m.depthWrite = false
  return m
}

export function colour(css: string): three.Color {
  return new three.Color().setStyle(css, three.LinearSRGBColorSpace) // shown as it is, without conversion
}
