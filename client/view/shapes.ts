/** What is drawn of a solid or of a mesh, whoever draws it. */
import type { SceneMesh, SceneSolid, Triple } from '../../server/src/protocol.ts'
import { along } from './camera.ts'

/** In the plane the zone has no faces: it is one. */
export function filled(solid: SceneSolid): SceneSolid {
  if (solid.faces.length > 0 || solid.vertices.length < 3) return solid
  const corners = solid.vertices.map((_, i) => i)
  const middle = solid.vertices.reduce<Triple>((m, v) => along(m, v, 1 / 2), solid.vertices[0])
  const bearing = (i: number) =>
    Math.atan2(solid.vertices[i][1] - middle[1], solid.vertices[i][0] - middle[0])
  return { ...solid, faces: [corners.sort((i, j) => bearing(i) - bearing(j))] }
}

/** Radii of mesh points in px: the area goes with the weight. */
export const dotRadii = ({ weights }: SceneMesh): number[] => {
  const most = Math.max(...weights)
  return weights.map(weight => 1.6 + 2.6 * Math.sqrt(weight / most))
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
