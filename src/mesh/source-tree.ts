// The least of size_i + growth * distance over many sources, without looking at all of them: a tree of boxes, each with the least size
// in it, searched with branch and bound (J.L. Bentley, Commun. ACM 18 (1975) 509). Cost of a query: about the logarithm of the
// number of sources; of the tree: n log n.

/** A place and the size wanted there. */
export interface Source {
  readonly x: number
  readonly y: number
  readonly size: number
}

/** Sources in a leaf of the tree. */
const LEAF = 8

/** The function (x, y) -> min over the sources of size + growth * distance; Infinity without sources. */
export function leastOver(sources: readonly Source[], growth: number): (x: number, y: number) => number {
  const n = sources.length
  const order = Array.from(sources.keys())
  // of each node: box, least size, and its sources in `order` (a leaf) or its two children
  const box: number[] = []
  const least: number[] = []
  const first: number[] = []
  const second: number[] = []
  const build = (a: number, b: number): void => {
    const node = least.length
    let [x0, y0, x1, y1, size] = [Infinity, Infinity, -Infinity, -Infinity, Infinity]
    for (let i = a; i < b; i++) {
      const source = sources[order[i]]
      x0 = Math.min(x0, source.x)
      y0 = Math.min(y0, source.y)
      x1 = Math.max(x1, source.x)
      y1 = Math.max(y1, source.y)
      size = Math.min(size, source.size)
    }
    box.push(x0, y0, x1, y1)
    least.push(size)
    first.push(a)
    second.push(b)
    if (b - a > LEAF) {
      const along = x1 - x0 >= y1 - y0 ? 'x' : 'y'
      const sorted = order.slice(a, b).sort((p, q) => sources[p][along] - sources[q][along] || p - q)
      sorted.forEach((source, i) => {
        order[a + i] = source
      })
      const middle = (a + b) >> 1
      // children have positive numbers, a leaf's end is stored as a negative one
      first[node] = least.length
      build(a, middle)
      second[node] = least.length
      build(middle, b)
    } else second[node] = -b
  }
  if (n > 0) build(0, n)

  const x = Float64Array.from(order, (i) => sources[i].x)
  const y = Float64Array.from(order, (i) => sources[i].y)
  const size = Float64Array.from(order, (i) => sources[i].size)
  const [boxes, leasts] = [Float64Array.from(box), Float64Array.from(least)]
  const [firsts, seconds] = [Int32Array.from(first), Int32Array.from(second)]
  const boundOf = (node: number, px: number, py: number): number => {
    const dx = Math.max(boxes[4 * node] - px, px - boxes[4 * node + 2], 0)
    const dy = Math.max(boxes[4 * node + 1] - py, py - boxes[4 * node + 3], 0)
    return leasts[node] + growth * Math.sqrt(dx * dx + dy * dy)
  }
  // halving splits: a tree of 2^60 sources is 60 deep
  const waiting = new Int32Array(64)
  const bound = new Float64Array(64)
  return (px, py) => {
    let best = Infinity
    let count = 0
    waiting[0] = 0
    bound[0] = 0
    if (n > 0) count = 1
    while (count > 0) {
      count--
      if (bound[count] >= best) continue
      const node = waiting[count]
      if (seconds[node] <= 0) {
        for (let i = firsts[node]; i < -seconds[node]; i++) {
          const here = size[i] + growth * Math.hypot(px - x[i], py - y[i])
          if (here < best) best = here
        }
        continue
      }
      // the child that promises more goes on top
      const [a, b] = [firsts[node], seconds[node]]
      const [boundA, boundB] = [boundOf(a, px, py), boundOf(b, px, py)]
      const aFirst = boundA <= boundB
      waiting[count] = aFirst ? b : a
      bound[count++] = aFirst ? boundB : boundA
      waiting[count] = aFirst ? a : b
      bound[count++] = aFirst ? boundA : boundB
    }
    return best
  }
}
