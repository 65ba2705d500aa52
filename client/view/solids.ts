/** What WebGL draws: translucent solids, and points by the thousand. Lines and labels are drawn above it. */
import type { SceneMesh, SceneSolid, Triple } from '../../server/src/protocol.ts'
import { type Camera, sum } from './camera.ts'

// Three small programs need no library: the page is read and understood before anything is seen of it.

/** A place goes in as attribute 0, what its program wants with it as attribute 1. */
const HEAD = `#version 300 es
precision highp float;
uniform mat4 view;
uniform mat4 projection;
uniform vec3 colour;
uniform float opacity;
`
const VERTEX = `${HEAD}layout(location = 0) in vec3 position;
`
const FRAGMENT = `${HEAD}out vec4 seen;
`

/** Faces seen edge-on are a little denser, as of glass; one side is in the light. */
const GLASS = {
  vertex: `${VERTEX}layout(location = 1) in vec3 normal;
out vec3 turned;
void main() {
  turned = normalize(mat3(view) * normal);
  gl_Position = projection * view * vec4(position, 1.0);
}`,
  fragment: `${FRAGMENT}uniform vec3 light;
uniform float shade;
in vec3 turned;
void main() {
  vec3 n = normalize(turned);
  float lit = 0.5 + 0.5 * dot(n.z < 0.0 ? -n : n, normalize(vec3(-0.5, 0.75, 0.6)));
  seen = vec4(mix(colour, light, shade * (1.0 - lit)), opacity * (1.25 - 0.6 * abs(n.z)));
}`,
}

const LINES = {
  vertex: `${VERTEX}void main() {
  gl_Position = projection * (view * vec4(position, 1.0));
}`,
  fragment: `${FRAGMENT}void main() {
  seen = vec4(colour, opacity);
}`,
}

const DOTS = {
  vertex: `${VERTEX}layout(location = 1) in float radius;
uniform float ratio;
uniform float reach;
out float near;
void main() {
  vec4 place = view * vec4(position, 1.0);
  near = 0.5 + 0.5 * clamp(place.z / reach, -1.0, 1.0);
  gl_Position = projection * place;
  gl_PointSize = 2.0 * radius * ratio + 1.0;
}`,
  fragment: `${FRAGMENT}in float near;
void main() {
  float r = length(gl_PointCoord - 0.5) * 2.0;
  float edge = fwidth(r);
  seen = vec4(colour, (1.0 - smoothstep(1.0 - 2.0 * edge, 1.0, r)) * opacity * (0.45 + 0.55 * near));
}`,
}

const SHADERS = { glass: GLASS, lines: LINES, dots: DOTS }
type Kind = keyof typeof SHADERS
const KINDS = Object.keys(SHADERS) as Kind[]

export interface SolidLook {
  readonly colour: string
  /** What its dark side is mixed with. */
  readonly shadow: string
  readonly opacity: number
  /** Hides what is behind it, as an n-th zone does. */
  readonly solid?: boolean
}

interface Part {
  readonly kind: Kind
  /** Lower ones are drawn first; among the same, farther ones. */
  readonly order: number
  /** Of the box around it. */
  readonly middle: Triple
  readonly positions: Float32Array
  /** Attribute 1, with `width` numbers a place. */
  readonly more?: { readonly data: Float32Array; readonly width: number }
  readonly colours: Readonly<Record<string, Triple>>
  readonly numbers: Readonly<Record<string, number>>
  readonly testsDepth: boolean
  readonly writesDepth: boolean
  /** What the graphics card holds of it, once it has been drawn. */
  held?: { readonly array: WebGLVertexArrayObject; readonly buffers: readonly WebGLBuffer[] }
}

export class Solids {
  readonly #gl: WebGL2RenderingContext
  readonly #programs = new Map<Kind, WebGLProgram>()
  readonly #parts = new Map<string, Part>()
  #ratio = 1
  #camera: Camera | undefined
  /** Of all that is drawn, from Γ. */
  reach = 1

  /** @throws where there is no WebGL. */
  constructor(private readonly canvas: HTMLCanvasElement) {
    const gl = canvas.getContext('webgl2', { alpha: true, antialias: true, preserveDrawingBuffer: false })
    if (!gl) throw new Error('no WebGL')
    this.#gl = gl
    this.#begin()
    // A graphics card that was taken away comes back empty.
    canvas.addEventListener('webglcontextlost', event => event.preventDefault())
    canvas.addEventListener('webglcontextrestored', () => {
      for (const part of this.#parts.values()) part.held = undefined
      this.#begin()
      if (this.#camera) this.draw(this.#camera)
    })
  }

  #begin(): void {
    const gl = this.#gl
    for (const kind of KINDS) this.#programs.set(kind, programOf(gl, SHADERS[kind]))
    gl.clearColor(0, 0, 0, 0)
    gl.enable(gl.BLEND)
    gl.blendFuncSeparate(gl.SRC_ALPHA, gl.ONE_MINUS_SRC_ALPHA, gl.ONE, gl.ONE_MINUS_SRC_ALPHA)
    gl.depthFunc(gl.LEQUAL)
    gl.polygonOffset(1.5, 2)
  }

  resize(width: number, height: number, ratio: number): void {
    this.canvas.width = Math.floor(width * ratio)
    this.canvas.height = Math.floor(height * ratio)
    this.#ratio = ratio
  }

  draw(camera: Camera): void {
    const gl = this.#gl
    this.#camera = camera
    if (gl.isContextLost()) return
    const { view, projection } = camera.matrices(this.reach)
    gl.viewport(0, 0, this.canvas.width, this.canvas.height)
    gl.depthMask(true)
    gl.clear(gl.COLOR_BUFFER_BIT | gl.DEPTH_BUFFER_BIT)
    // Rounded: two that have one middle keep their order while they turn.
    const depth = ({ middle }: Part) => Math.round((1e6 * camera.depth(middle)) / this.reach)
    const parts = [...this.#parts.values()].sort((a, b) => a.order - b.order || depth(a) - depth(b))
    for (const part of parts) {
      const program = this.#programs.get(part.kind)!
      const place = (name: string) => gl.getUniformLocation(program, name)
      gl.useProgram(program)
      gl.uniformMatrix4fv(place('view'), true, view)
      gl.uniformMatrix4fv(place('projection'), true, projection)
      const numbers = { ...part.numbers, ratio: this.#ratio, reach: camera.radius }
      for (const [name, value] of Object.entries(numbers)) gl.uniform1f(place(name), value)
      for (const [name, value] of Object.entries(part.colours)) gl.uniform3f(place(name), ...value)
      if (part.testsDepth) gl.enable(gl.DEPTH_TEST)
      else gl.disable(gl.DEPTH_TEST)
      gl.depthMask(part.writesDepth)
      // Edges of a solid lie in its faces: the faces, and nothing else, stand back a little.
      if (part.kind === 'glass') gl.enable(gl.POLYGON_OFFSET_FILL)
      else gl.disable(gl.POLYGON_OFFSET_FILL)
      part.held ??= hold(gl, part)
      gl.bindVertexArray(part.held.array)
      const mode = { glass: gl.TRIANGLES, lines: gl.LINES, dots: gl.POINTS }[part.kind]
      gl.drawArrays(mode, 0, part.positions.length / 3)
    }
  }

  remove(name: string): void {
    for (const [key, { held }] of [...this.#parts]) {
      if (key !== name && !key.startsWith(`${name}/`)) continue
      if (held) {
        this.#gl.deleteVertexArray(held.array)
        for (const buffer of held.buffers) this.#gl.deleteBuffer(buffer)
      }
      this.#parts.delete(key)
    }
  }

  /** The faces of a solid, or of copies of it. */
  setSolid(name: string, solid: SceneSolid, look: SolidLook, copies: readonly Triple[] = [[0, 0, 0]]): void {
    this.remove(name)
    const { positions, normals } = triangles(solid, copies)
    if (positions.length === 0) return
    this.#parts.set(name, {
      kind: 'glass',
      order: look.solid ? 3 : 1,
      middle: middleOf(positions),
      positions: new Float32Array(positions),
      more: { data: new Float32Array(normals), width: 3 },
      colours: { colour: plainColour(look.colour), light: plainColour(look.shadow) },
      numbers: { opacity: look.opacity, shade: look.solid ? 0.55 : 0.4 },
      testsDepth: look.solid ?? false,
      writesDepth: look.solid ?? false,
    })
  }

  /** Thin edges of a solid, or of copies of it. */
  setEdges(
    name: string,
    { vertices, edges }: SceneSolid,
    { colour, opacity, solid }: Pick<SolidLook, 'colour' | 'opacity' | 'solid'>,
    copies: readonly Triple[] = [[0, 0, 0]],
  ): void {
    this.remove(name)
    const positions = copies.flatMap(at =>
      edges.flatMap(([i, j]) => [...sum(vertices[i], at), ...sum(vertices[j], at)]),
    )
    this.#parts.set(name, {
      kind: 'lines',
      order: solid ? 4 : 2,
      middle: middleOf(positions),
      positions: new Float32Array(positions),
      colours: { colour: plainColour(colour) },
      numbers: { opacity },
      testsDepth: solid ?? false,
      writesDepth: false,
    })
  }

  /** Round dots of a size on the screen, in px. */
  setDots(
    name: string,
    positions: readonly number[],
    radii: readonly number[],
    { colour, opacity }: { colour: string; opacity: number },
  ): void {
    this.remove(name)
    this.#parts.set(name, {
      kind: 'dots',
      order: 5,
      middle: middleOf(positions),
      positions: new Float32Array(positions),
      more: { data: new Float32Array(radii), width: 1 },
      colours: { colour: plainColour(colour) },
      numbers: { opacity },
      testsDepth: false,
      writesDepth: false,
    })
  }
}

function middleOf(positions: readonly number[]): Triple {
  const middle = (axis: number): number => {
    let [least, most] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]
    for (let i = axis; i < positions.length; i += 3) {
      least = Math.min(least, positions[i])
      most = Math.max(most, positions[i])
    }
    return (least + most) / 2
  }
  return [middle(0), middle(1), middle(2)]
}

/** @throws where the graphics card takes no such program. */
function programOf(gl: WebGL2RenderingContext, { vertex, fragment }: (typeof SHADERS)[Kind]): WebGLProgram {
  const program = gl.createProgram()
  for (const [type, text] of [
    [gl.VERTEX_SHADER, vertex],
    [gl.FRAGMENT_SHADER, fragment],
  ] as const) {
    const shader = gl.createShader(type)
    if (!shader) throw new Error('no shader')
    gl.shaderSource(shader, text)
    gl.compileShader(shader)
    gl.attachShader(program, shader)
  }
  gl.linkProgram(program)
  if (!gl.getProgramParameter(program, gl.LINK_STATUS))
    throw new Error(gl.getProgramInfoLog(program) || 'a shader does not link')
  return program
}

function hold(gl: WebGL2RenderingContext, { positions, more }: Part): NonNullable<Part['held']> {
  const array = gl.createVertexArray()
  gl.bindVertexArray(array)
  const buffers = [{ data: positions, width: 3 }, ...(more ? [more] : [])].map(({ data, width }, at) => {
    const buffer = gl.createBuffer()
    gl.bindBuffer(gl.ARRAY_BUFFER, buffer)
    gl.bufferData(gl.ARRAY_BUFFER, data, gl.STATIC_DRAW)
    gl.enableVertexAttribArray(at)
    gl.vertexAttribPointer(at, width, gl.FLOAT, false, 0, 0)
    return buffer
  })
  return { array, buffers }
}

/** Radii of mesh points in px: the area goes with the weight. */
export const dotRadii = ({ weights }: SceneMesh): number[] => {
  const most = Math.max(...weights)
  return weights.map(weight => 1.6 + 2.6 * Math.sqrt(weight / most))
}

function triangles(
  { vertices, faces }: SceneSolid,
  copies: readonly Triple[],
): { positions: number[]; normals: number[] } {
  const positions: number[] = []
  const normals: number[] = []
  for (const face of faces) {
    const corners = face.map(i => vertices[i])
    const normal = normalOf(corners)
    for (const at of copies)
      for (let i = 1; i + 1 < corners.length; i++)
        for (const corner of [corners[0], corners[i], corners[i + 1]]) {
          positions.push(...sum(corner, at))
          normals.push(...normal)
        }
  }
  return { positions, normals }
}

export function normalOf(corners: readonly Triple[]): Triple {
  const n: [number, number, number] = [0, 0, 0]
  for (let i = 0; i < corners.length; i++) {
    const [u, v] = [corners[i], corners[(i + 1) % corners.length]]
    n[0] += u[1] * v[2] - u[2] * v[1]
    n[1] += u[2] * v[0] - u[0] * v[2]
    n[2] += u[0] * v[1] - u[1] * v[0]
  }
  const length = Math.hypot(...n) || 1
  return [n[0] / length, n[1] / length, n[2] / length]
}

/** A colour of the theme as it stands, without conversion: the canvas is not colour-managed either. */
function plainColour(css: string): Triple {
  probe.fillStyle = '#888888'
  probe.fillStyle = css
  probe.clearRect(0, 0, 1, 1)
  probe.fillRect(0, 0, 1, 1)
  const [r, g, b] = probe.getImageData(0, 0, 1, 1).data
  return [r / 255, g / 255, b / 255]
}
const probe = new OffscreenCanvas(1, 1).getContext('2d', { willReadFrequently: true })!
