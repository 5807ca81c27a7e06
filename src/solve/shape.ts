// Hierarchic shape functions of the triangle: vertex, side and interior modes of any order.
// B. Szabo, I. Babuska, Finite Element Analysis, Wiley 1991, ch. 6 (vertex and side modes: integrated Legendre polynomials);
// interior modes: the bubble L0 L1 L2 times the polynomials of M. Dubiner, J. Sci. Comput. 6 (1991) 345, with the Jacobi
// weights that make the products orthogonal. Functions are listed by degree (vertices, then for each degree k the three
// sides' modes and the k - 2 interior ones), so the functions of a lower order are a leading part of those of a higher one.
// Reference triangle: nodes (0,0), (1,0), (0,1); L0 = 1 - xi - eta, L1 = xi, L2 = eta; side k runs from node k to node k + 1.

/** Number of shape functions of a triangle of the given order: (p + 1)(p + 2) / 2. */
export function triangleFunctionCount(order: number): number {
  return ((order + 1) * (order + 2)) / 2
}

/** Where each shape function of an element belongs. */
export interface ElementModes {
  readonly order: number
  readonly count: number
  /** Functions on nodes and sides in the order of the condensed element: nodes 0 1 2 (3), side 0 by degree, side 1, ... */
  readonly outer: Int32Array
  /** Interior functions, by degree. */
  readonly inner: Int32Array
}

/** The shape functions of one kind of element at one order. */
export interface ElementShape {
  readonly modes: ElementModes
  /**
   * Fills the values and the derivatives by xi and eta of all functions at the reference point (xi, eta), in place:
   * `modes.count` numbers of each array from `offset` on.
   */
  readonly fill: (
    xi: number, eta: number, value: Float64Array, byXi: Float64Array, byEta: Float64Array, offset?: number
  ) => void
}

/**
 * The index lists that split the shape functions of an element into outer and inner ones: vertices, then for each degree
 * k = 2 .. order one mode a side and as many interior ones as `innerOfDegree(k)` says.
 * @param corners 3 or 4, the number of nodes and of sides
 */
export function modesByDegree(order: number, corners: number, innerOfDegree: (degree: number) => number): ElementModes {
  const outer = new Int32Array(corners * order)
  const inner: number[] = []
  for (let node = 0; node < corners; node++) outer[node] = node
  let next = corners
  for (let degree = 2; degree <= order; degree++) {
    for (let side = 0; side < corners; side++) outer[corners + side * (order - 1) + degree - 2] = next++
    for (let j = 0; j < innerOfDegree(degree); j++) inner.push(next++)
  }
  return { order, count: next, outer, inner: Int32Array.from(inner) }
}

/** The index lists of a triangle: degree k has k - 2 interior functions. */
export function triangleModes(order: number): ElementModes {
  return modesByDegree(order, 3, (degree) => degree - 2)
}

/** The shape functions of a triangle. */
export function triangleShape(order: number): ElementShape {
  const scratch = shapeScratch(order)
  return {
    modes: triangleModes(order),
    fill: (xi, eta, value, byXi, byEta, offset) => fillTriangleShape(order, xi, eta, scratch, value, byXi, byEta, offset)
  }
}

/**
 * Kernel of the side mode of degree k: the mode is La Lb kernel(Lb - La), whose trace on the side is the integrated
 * Legendre polynomial sqrt((2k - 1) / 2) times the integral of P_{k-1} from -1, up to sign. The kernels are multiples of the
 * Gegenbauer polynomials C_{k-2}^{(3/2)}(s).
 * Fills kernel[k - 2] and slope[k - 2] (d kernel / ds) for k = 2 .. order, at s in [-1, 1].
 */
export function fillSideKernels(order: number, s: number, kernel: Float64Array, slope: Float64Array): void {
  let c = 1
  let cBefore = 0
  let d = 0
  let dBefore = 0
  for (let n = 0; n <= order - 2; n++) {
    if (n > 0) {
      const a = (2 * n + 1) / n
      const b = (n + 1) / n
      const cNext = a * s * c - b * cBefore
      const dNext = a * (c + s * d) - b * dBefore
      cBefore = c
      dBefore = d
      c = cNext
      d = dNext
    }
    const k = n + 2
    const scale = (4 * Math.sqrt((2 * k - 1) / 2)) / (k * (k - 1))
    kernel[n] = scale * c
    slope[n] = scale * d
  }
}

/** Scratch arrays of `fillTriangleShape`, sized for one order and reused between points. */
export interface ShapeScratch {
  readonly kernel: Float64Array
  readonly slope: Float64Array
  readonly tower: Float64Array
  readonly towerX: Float64Array
  readonly towerT: Float64Array
}

export function shapeScratch(order: number): ShapeScratch {
  const size = Math.max(1, order)
  const array = () => new Float64Array(size)
  return { kernel: array(), slope: array(), tower: array(), towerX: array(), towerT: array() }
}

/**
 * Fills the values and the derivatives by xi and eta of all shape functions at the reference point (xi, eta).
 * Each output holds triangleFunctionCount(order) numbers from `offset` on.
 */
export function fillTriangleShape(
  order: number,
  xi: number,
  eta: number,
  scratch: ShapeScratch,
  value: Float64Array,
  byXi: Float64Array,
  byEta: Float64Array,
  offset = 0
): void {
  const l0 = 1 - xi - eta
  const l = [l0, xi, eta]
  const lXi = [-1, 1, 0]
  const lEta = [-1, 0, 1]
  for (let node = 0; node < 3; node++) {
    value[offset + node] = l[node]
    byXi[offset + node] = lXi[node]
    byEta[offset + node] = lEta[node]
  }
  if (order < 2) return

  // side modes
  for (let side = 0; side < 3; side++) {
    const a = side
    const b = (side + 1) % 3
    const la = l[a]
    const lb = l[b]
    fillSideKernels(order, lb - la, scratch.kernel, scratch.slope)
    const product = la * lb
    const productXi = lXi[a] * lb + la * lXi[b]
    const productEta = lEta[a] * lb + la * lEta[b]
    const sXi = lXi[b] - lXi[a]
    const sEta = lEta[b] - lEta[a]
    for (let k = 2; k <= order; k++) {
      const at = offset + triangleFunctionCount(k - 1) + side
      const f = scratch.kernel[k - 2]
      const g = scratch.slope[k - 2] * product
      value[at] = product * f
      byXi[at] = productXi * f + g * sXi
      byEta[at] = productEta * f + g * sEta
    }
  }
  if (order < 3) return

  // interior modes: bubble * q_i(L1 - L0, L0 + L1) * P_j^(2i+5, 2)(2 L2 - 1), i + j = k - 3
  const bubble = l0 * xi * eta
  const bubbleXi = eta * (l0 - xi)
  const bubbleEta = xi * (l0 - eta)
  const { tower, towerX, towerT } = scratch
  fillGegenbauerTower(order - 3, xi - l0, l0 + xi, tower, towerX, towerT)
  const y = 2 * eta - 1
  for (let i = 0; i <= order - 3; i++) {
    const q = tower[i]
    // d(L1 - L0) = (2, 1), d(L0 + L1) = (0, -1)
    const qXi = 2 * towerX[i]
    const qEta = towerX[i] - towerT[i]
    const alpha = 2 * i + 5
    const beta = 2
    let p = 1
    let pBefore = 0
    let d = 0
    let dBefore = 0
    for (let j = 0; i + j <= order - 3; j++) {
      if (j > 0) {
        // three-term recurrence of the Jacobi polynomials (G. Szego, Orthogonal Polynomials, eq. 4.5.1)
        const m = 2 * j + alpha + beta
        const denominator = 2 * j * (j + alpha + beta) * (m - 2)
        const a = ((m - 1) * m * (m - 2)) / denominator
        const b = ((m - 1) * (alpha * alpha - beta * beta)) / denominator
        const c = (2 * (j + alpha - 1) * (j + beta - 1) * m) / denominator
        const pNext = (a * y + b) * p - c * pBefore
        const dNext = a * p + (a * y + b) * d - c * dBefore
        pBefore = p
        dBefore = d
        p = pNext
        d = dNext
      }
      const at = offset + triangleFunctionCount(i + j + 2) + 3 + i
      const scale = 16 * (i + 1)
      value[at] = scale * bubble * q * p
      byXi[at] = scale * (bubbleXi * q + bubble * qXi) * p
      byEta[at] = scale * ((bubbleEta * q + bubble * qEta) * p + 2 * bubble * q * d)
    }
  }
}

/** Homogeneous Gegenbauer polynomials t^n C_n^{(5/2)}(x / t) for n = 0 .. last, with derivatives by x and t. */
function fillGegenbauerTower(
  last: number,
  x: number,
  t: number,
  value: Float64Array,
  byX: Float64Array,
  byT: Float64Array
): void {
  value[0] = 1
  byX[0] = 0
  byT[0] = 0
  for (let n = 1; n <= last; n++) {
    const a = (2 * n + 3) / n
    const b = n > 1 ? (n + 3) / n : 0
    const c = value[n - 1]
    const cBefore = n > 1 ? value[n - 2] : 0
    value[n] = a * x * c - b * t * t * cBefore
    byX[n] = a * (c + x * byX[n - 1]) - (n > 1 ? b * t * t * byX[n - 2] : 0)
    byT[n] = a * x * byT[n - 1] - (n > 1 ? b * (2 * t * cBefore + t * t * byT[n - 2]) : 0)
  }
}
