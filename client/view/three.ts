/** What the solids need of the library: a bundle of its own, which the first picture does not wait for. */
export {
  BufferGeometry,
  Camera,
  Color,
  DoubleSide,
  Float32BufferAttribute,
  LineBasicMaterial,
  LinearSRGBColorSpace,
  LineSegments,
  Mesh,
  Points,
  Scene,
  ShaderMaterial,
  WebGLRenderer,
} from 'three'
