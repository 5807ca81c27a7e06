// Fill-reducing order of elimination by minimum degree: P.R. Amestoy, T.A. Davis, I.S. Duff, SIAM J. Matrix Anal. Appl. 17 (1996) 886.
// The cliques are the first elements of the quotient graph, so no adjacency between vertices is ever stored: a vertex knows its
// elements, an element its vertices. Eliminating a pivot unites the pivot's elements in a new one, which takes no more room than
// they did. Near-linear on plane meshes: 0.1 s for 50 000 vertices.

import type { CliqueGraph } from './graph.ts'

/** The quotient graph while the elimination goes on. Element numbers: cliques first, then one for each pivot, ascending in time. */
interface Quotient {
  /** Elements of vertex v, ascending: `element` from elementStart[v], elementCount[v] of them. */
  readonly element: Int32Array
  readonly elementStart: Int32Array
  readonly elementCount: Int32Array
  /** Vertices of element e, dead ones among them: `member` from memberStart[e], memberCount[e] of them, -1 of an absorbed element. */
  readonly member: Int32Array
  readonly memberStart: Int32Array
  readonly memberCount: Int32Array
  /** Dofs of each element's living vertices; constant, for an eliminated vertex takes all its elements with it. */
  readonly size: Int32Array
  /** Dofs of each vertex with those merged into it, 0 of a dead one. */
  readonly weight: Int32Array
  /** Vertices merged into one another: the next in the chain (-1 at its end), and the last of the chain that a vertex heads. */
  readonly next: Int32Array
  readonly last: Int32Array
}

/**
 * Order in which to eliminate the blocks of dofs (`vertices` block numbers, the first to go first), chosen for little fill.
 * The weights count: degrees are in dofs. Ties go to the vertex whose degree changed last, so the order is a function of the graph.
 */
export function orderMinimumDegree(graph: CliqueGraph): Int32Array {
  const { vertices, weight: dofs } = graph
  const cliques = graph.cliqueStart.length - 1
  const quotient = quotientOf(graph)
  const { element, elementStart, elementCount, member, memberStart, memberCount, size, weight, next, last } = quotient
  let remaining = dofs.reduce((sum, w) => sum + w, 0)
  const queue = degreeLists(initialDegrees(quotient, remaining), remaining)

  const order = new Int32Array(vertices)
  let ordered = 0
  const eliminate = (v: number): void => {
    remaining -= weight[v]
    weight[v] = 0
    for (let u = v; u >= 0; u = next[u]) order[ordered++] = u
  }
  const seen = new Int32Array(vertices).fill(-1)
  // of each element that touches the front: its dofs outside of it, valid while outsideOf is the front's number
  const outside = new Int32Array(size.length)
  const outsideOf = new Int32Array(size.length).fill(-1)
  const bucket = new Int32Array(vertices).fill(-1)
  const bucketNext = new Int32Array(vertices)
  const hash = new Int32Array(vertices)
  let end = graph.clique.length

  for (let own = cliques, pivot = queue.pop(); pivot >= 0; own++, pivot = queue.pop()) {
    // the front: what the pivot's elements hold, united in a new element that absorbs them
    let room = 0
    for (let i = 0; i < elementCount[pivot]; i++) room += memberCount[element[elementStart[pivot] + i]]
    if (end + room > member.length) end = compact(quotient, own)
    eliminate(pivot)
    const from = end
    let front = 0
    for (let i = 0; i < elementCount[pivot]; i++) {
      const e = element[elementStart[pivot] + i]
      for (let at = memberStart[e]; at < memberStart[e] + memberCount[e]; at++) {
        const v = member[at]
        if (weight[v] === 0 || seen[v] === own) continue
        seen[v] = own
        member[end++] = v
        front += weight[v]
      }
      memberCount[e] = -1
    }

    // what each element that touches the front has outside of it; one with nothing there is absorbed as well
    for (let at = from; at < end; at++) {
      const v = member[at]
      for (let i = elementStart[v]; i < elementStart[v] + elementCount[v]; i++) {
        const e = element[i]
        if (memberCount[e] < 0) continue
        if (outsideOf[e] !== own) {
          outsideOf[e] = own
          outside[e] = size[e]
        }
        outside[e] -= weight[v]
        if (outside[e] === 0) memberCount[e] = -1
      }
    }

    // a vertex with no element besides the front goes with the pivot; two with the same elements go on as one
    let kept = from
    for (let at = from; at < end; at++) {
      const v = member[at]
      const first = elementStart[v]
      let count = 0
      let sum = 0
      for (let i = first; i < first + elementCount[v]; i++) {
        if (memberCount[element[i]] < 0) continue
        element[first + count++] = element[i]
        sum += element[i]
      }
      elementCount[v] = count
      if (count === 0) {
        queue.remove(v)
        front -= weight[v]
        eliminate(v)
        continue
      }
      hash[v] = sum % vertices
      let twin = bucket[hash[v]]
      while (twin >= 0 && !sameElements(quotient, twin, v)) twin = bucketNext[twin]
      if (twin < 0) {
        bucketNext[v] = bucket[hash[v]]
        bucket[hash[v]] = v
        member[kept++] = v
        continue
      }
      queue.remove(v)
      weight[twin] += weight[v]
      weight[v] = 0
      next[last[twin]] = v
      last[twin] = last[v]
    }
    end = kept

    // degrees: of three upper bounds the least
    for (let at = from; at < end; at++) {
      const v = member[at]
      bucket[hash[v]] = -1
      const inFront = front - weight[v]
      let degree = inFront
      const first = elementStart[v]
      for (let i = first; i < first + elementCount[v]; i++) degree += outside[element[i]]
      // the pivot's element that v has lost, or the one absorbed since, left room for the new one
      element[first + elementCount[v]++] = own
      queue.move(v, Math.min(degree, queue.degree[v] + inFront, remaining - weight[v]))
    }
    memberStart[own] = from
    memberCount[own] = end - from
    size[own] = front
  }
  return order
}

function quotientOf({ vertices, cliqueStart, clique, weight }: CliqueGraph): Quotient {
  const cliques = cliqueStart.length - 1
  const all = cliques + vertices
  const elementStart = new Int32Array(vertices + 1)
  for (const v of clique) elementStart[v + 1]++
  for (let v = 0; v < vertices; v++) elementStart[v + 1] += elementStart[v]
  const element = new Int32Array(clique.length)
  const elementCount = new Int32Array(vertices)
  const memberCount = new Int32Array(all)
  const memberStart = new Int32Array(all)
  const size = new Int32Array(all)
  for (let e = 0; e < cliques; e++) {
    memberStart[e] = cliqueStart[e]
    memberCount[e] = cliqueStart[e + 1] - cliqueStart[e]
    for (let at = cliqueStart[e]; at < cliqueStart[e + 1]; at++) {
      const v = clique[at]
      size[e] += weight[v]
      element[elementStart[v] + elementCount[v]++] = e
    }
  }
  // living elements hold at most as many vertices as the cliques did, and so does a new one while it is gathered
  const member = new Int32Array(2 * clique.length)
  member.set(clique)
  return {
    element,
    elementStart,
    elementCount,
    member,
    memberStart,
    memberCount,
    size,
    weight: Int32Array.from(weight),
    next: new Int32Array(vertices).fill(-1),
    last: Int32Array.from({ length: vertices }, (_, v) => v)
  }
}

/** Upper bounds of the dofs that each vertex is coupled to. */
function initialDegrees({ element, elementStart, size, weight }: Quotient, total: number): Int32Array {
  return weight.map((own, v) => {
    let degree = 0
    for (let i = elementStart[v]; i < elementStart[v + 1]; i++) degree += size[element[i]] - own
    return Math.min(degree, total - own)
  })
}

/** In place: moves the lists of living elements below `count` together, in order; returns where they end. */
function compact({ member, memberStart, memberCount }: Quotient, count: number): number {
  let end = 0
  for (let e = 0; e < count; e++) {
    if (memberCount[e] < 0) continue
    member.copyWithin(end, memberStart[e], memberStart[e] + memberCount[e])
    memberStart[e] = end
    end += memberCount[e]
  }
  return end
}

function sameElements({ element, elementStart, elementCount }: Quotient, u: number, v: number): boolean {
  const count = elementCount[u]
  if (elementCount[v] !== count) return false
  for (let i = 0; i < count; i++) {
    if (element[elementStart[u] + i] !== element[elementStart[v] + i]) return false
  }
  return true
}

/** Vertices by degree (0 to `highest`): a doubly linked list for each degree, in which the last that came is the first to go. */
function degreeLists(degree: Int32Array, highest: number) {
  const head = new Int32Array(highest + 1).fill(-1)
  const next = new Int32Array(degree.length)
  const previous = new Int32Array(degree.length)
  let lowest = 0
  const insert = (v: number): void => {
    const d = degree[v]
    next[v] = head[d]
    previous[v] = -1
    if (head[d] >= 0) previous[head[d]] = v
    head[d] = v
    if (d < lowest) lowest = d
  }
  const remove = (v: number): void => {
    if (previous[v] >= 0) next[previous[v]] = next[v]
    else head[degree[v]] = next[v]
    if (next[v] >= 0) previous[next[v]] = previous[v]
  }
  for (let v = degree.length - 1; v >= 0; v--) insert(v)
  return {
    degree,
    remove,
    /** Takes a vertex of the lowest degree out, -1 when none is left. */
    pop(): number {
      while (lowest <= highest && head[lowest] < 0) lowest++
      if (lowest > highest) return -1
      const v = head[lowest]
      remove(v)
      return v
    },
    move(v: number, to: number): void {
      remove(v)
      degree[v] = to
      insert(v)
    }
  }
}
