/** What WebGL draws: translucent solids, and points by the thousand. Lines and labels are drawn above it. */
import type {
  BufferGeometry,
  Camera as ThreeCamera,
  Color,
  Mesh,
  Object3D,
  Scene as ThreeScene,
  ShaderMaterial,
  WebGLRenderer,
} from 'three'
import type { SceneSolid, Triple } from '../../server/src/protocol.ts'
import { type Camera, sum } from './camera.ts'
import { normalOf } from './shapes.ts'

/** The part of the library that is used. It comes after the first picture, which does without. */
export type Three = typeof import('./three.ts')

/** Faces seen edge-on are a little denser, as of glass; one side is in the light. */
const GLASS = {
  vertexShader: `varying vec3 turned;
void main() {
  turned = normalize(mat3(viewMatrix) * normal);
  gl_Position = projectionMatrix * viewMatrix * vec4(position, 1.0);
}`,
  fragmentShader: `uniform vec3 colour;
uniform vec3 light;
uniform float opacity;
uniform float shade;
varying vec3 turned;
void main() {
  vec3 n = normalize(turned);
  float lit = 0.5 + 0.5 * dot(n.z < 0.0 ? -n : n, normalize(vec3(-0.5, 0.75, 0.6)));
  gl_FragColor = vec4(mix(colour, light, shade * (1.0 - lit)), opacity * (1.25 - 0.6 * abs(n.z)));
}`,
}

const DOTS = {
  vertexShader: `attribute float radius;
uniform float ratio;
uniform float reach;
varying float near;
void main() {
  vec4 seen = viewMatrix * vec4(position, 1.0);
  near = 0.5 + 0.5 * clamp(seen.z / reach, -1.0, 1.0);
  gl_Position = projectionMatrix * seen;
  gl_PointSize = 2.0 * radius * ratio + 1.0;
}`,
  fragmentShader: `uniform vec3 colour;
uniform float opacity;
varying float near;
void main() {
  float r = length(gl_PointCoord - 0.5) * 2.0;
  float edge = fwidth(r);
  gl_FragColor = vec4(colour, (1.0 - smoothstep(1.0 - 2.0 * edge, 1.0, r)) * opacity * (0.45 + 0.55 * near));
}`,
}

export interface SolidLook {
  readonly colour: string
  /** What its dark side is mixed with. */
  readonly shadow: string
  readonly opacity: number
  /** Hides what is behind it, as an n-th zone does. */
  readonly solid?: boolean
}

type Entries = Parameters<ThreeCamera['projectionMatrix']['set']>

export class Solids {
  readonly #three: Three
  readonly #renderer: WebGLRenderer
  readonly #camera: ThreeCamera
  readonly #scene: ThreeScene
  readonly #parts = new Map<string, Object3D>()
  /** Of all that is drawn, from Γ. */
  reach = 1

  /** @throws where there is no WebGL. */
  constructor(canvas: HTMLCanvasElement, three: Three) {
    this.#three = three
    this.#camera = new three.Camera()
    this.#scene = new three.Scene()
    this.#renderer = new three.WebGLRenderer({
      canvas,
      alpha: true,
      antialias: true,
      preserveDrawingBuffer: false,
    })
    // Colours of the theme go to the screen as they are.
    this.#renderer.outputColorSpace = three.LinearSRGBColorSpace
    this.#renderer.setClearColor(0x000000, 0)
    this.#camera.matrixWorldAutoUpdate = false
  }

  resize(width: number, height: number, ratio: number): void {
    this.#renderer.setPixelRatio(ratio)
    this.#renderer.setSize(width, height, false)
    this.#forDots(material => (material.uniforms.ratio.value = ratio))
  }

  draw(camera: Camera): void {
    const { view, projection } = camera.matrices(this.reach)
    this.#camera.matrixWorldInverse.set(...(view as Entries))
    this.#camera.matrixWorld.copy(this.#camera.matrixWorldInverse).invert()
    this.#camera.projectionMatrix.set(...(projection as Entries))
    this.#camera.projectionMatrixInverse.copy(this.#camera.projectionMatrix).invert()
    this.#forDots(material => (material.uniforms.reach.value = camera.radius))
    this.#renderer.render(this.#scene, this.#camera)
  }

  #forDots(change: (material: ShaderMaterial) => void): void {
    for (const part of this.#parts.values())
      if (part instanceof this.#three.Points) change(part.material as ShaderMaterial)
  }

  remove(name: string): void {
    for (const key of [...this.#parts.keys()]) {
      if (key !== name && !key.startsWith(`${name}/`)) continue
      const part = this.#parts.get(key) as Mesh
      this.#scene.remove(part)
      part.geometry.dispose()
      for (const material of [part.material].flat()) material.dispose()
      this.#parts.delete(key)
    }
  }

  #add(name: string, part: Object3D, order: number): void {
    part.frustumCulled = false
    part.renderOrder = order
    part.matrixAutoUpdate = false
    this.#parts.set(name, part)
    this.#scene.add(part)
  }

  /** The faces of a solid, or of copies of it. */
  setSolid(name: string, solid: SceneSolid, look: SolidLook, copies: readonly Triple[] = [[0, 0, 0]]): void {
    this.remove(name)
    const { DoubleSide, Mesh, ShaderMaterial } = this.#three
    const geometry = this.#triangles(solid, copies)
    if (!geometry) return
    const material = new ShaderMaterial({
      ...GLASS,
      uniforms: {
        colour: { value: this.#plainColour(look.colour) },
        light: { value: this.#plainColour(look.shadow) },
        opacity: { value: look.opacity },
        shade: { value: look.solid ? 0.55 : 0.4 },
      },
      transparent: true,
      depthWrite: look.solid ?? false,
      depthTest: look.solid ?? false,
      side: DoubleSide,
      // Edges of a solid lie in its faces: the faces stand back a little.
      polygonOffset: true,
      polygonOffsetFactor: 1.5,
      polygonOffsetUnits: 2,
    })
    this.#add(name, new Mesh(geometry, material), look.solid ? 3 : 1)
  }

  /** Thin edges of a solid, or of copies of it. */
  setEdges(
    name: string,
    { vertices, edges }: SceneSolid,
    { colour, opacity, solid }: Pick<SolidLook, 'colour' | 'opacity' | 'solid'>,
    copies: readonly Triple[] = [[0, 0, 0]],
  ): void {
    this.remove(name)
    const { BufferGeometry, Float32BufferAttribute, LineBasicMaterial, LineSegments } = this.#three
    const positions = copies.flatMap(at =>
      edges.flatMap(([i, j]) => [...sum(vertices[i], at), ...sum(vertices[j], at)]),
    )
    const geometry = new BufferGeometry()
    geometry.setAttribute('position', new Float32BufferAttribute(positions, 3))
    const material = new LineBasicMaterial({
      color: this.#plainColour(colour),
      opacity,
      transparent: true,
      depthTest: solid ?? false,
      depthWrite: false,
    })
    this.#add(name, new LineSegments(geometry, material), solid ? 4 : 2)
  }

  /** Round dots of a size on the screen, in px. */
  setDots(
    name: string,
    positions: readonly number[],
    radii: readonly number[],
    { colour, opacity }: { colour: string; opacity: number },
    ratio: number,
  ): void {
    this.remove(name)
    const { BufferGeometry, Float32BufferAttribute, Points, ShaderMaterial } = this.#three
    const geometry = new BufferGeometry()
    geometry.setAttribute('position', new Float32BufferAttribute(positions, 3))
    geometry.setAttribute('radius', new Float32BufferAttribute(radii, 1))
    const material = new ShaderMaterial({
      ...DOTS,
      uniforms: {
        colour: { value: this.#plainColour(colour) },
        opacity: { value: opacity },
        ratio: { value: ratio },
        reach: { value: 1 },
      },
      transparent: true,
      depthTest: false,
      depthWrite: false,
    })
    this.#add(name, new Points(geometry, material), 5)
  }

  #triangles({ vertices, faces }: SceneSolid, copies: readonly Triple[]): BufferGeometry | undefined {
    const { BufferGeometry, Float32BufferAttribute } = this.#three
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
    if (positions.length === 0) return undefined
    const geometry = new BufferGeometry()
    geometry.setAttribute('position', new Float32BufferAttribute(positions, 3))
    geometry.setAttribute('normal', new Float32BufferAttribute(normals, 3))
    return geometry
  }

  /** A colour of the theme as it stands, without conversion: the canvas is not colour-managed either. */
  #plainColour(css: string): Color {
    probe.fillStyle = '#888888'
    probe.fillStyle = css
    probe.clearRect(0, 0, 1, 1)
    probe.fillRect(0, 0, 1, 1)
    const [r, g, b] = probe.getImageData(0, 0, 1, 1).data
    const colour = new this.#three.Color()
    colour.r = r / 255
    colour.g = g / 255
    colour.b = b / 255
    return colour
  }
}

const probe = new OffscreenCanvas(1, 1).getContext('2d', { willReadFrequently: true })!
