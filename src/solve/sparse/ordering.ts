// Fill-reducing ordering by minimum degree, and with it the assembly tree of a multifrontal factorisation.
// P.R. Amestoy, T.A. Davis, I.S. Duff, SIAM J. Matrix Anal. Appl. 17 (1996) 886: quotient graph, approximate external degree,
// element absorption, mass elimination, indistinguishable vertices. The matrix comes as cliques (its element matrices), which are
// the quotient graph's first elements, so adjacency between vertices never has to be stored: a vertex knows only its elements.

import type { CliqueGraph } from './graph.ts'

/** One front of the assembly tree, in the order of elimination: children come before their parents. */
export interface Front {
  /** Blocks eliminated here, in order. */
  readonly pivots: Int32Array
  /** Blocks that stay and are passed on to the parent. */
  readonly rest: Int32Array
  /** Fronts (indices) whose update matrices are assembled here. */
  readonly children: readonly number[]
  /** Cliques of the graph that are assembled here. */
  readonly cliques: readonly number[]
}

/** Assembly tree of the graph; every block is a pivot of exactly one front. Ties are broken by number: deterministic. */
export function assemblyTree(graph: CliqueGraph): Front[] {
  const { vertices, weight } = graph
  const cliques = graph.cliqueStart.length - 1
  // elements: first the cliques, then one a front
  const members: (Int32Array | null)[] = []
  // dofs of an element's blocks: the same as long as it lives, for an eliminated block takes all its elements with it
  const elementSize: number[] = []
  const elementsOf: number[][] = Array.from({ length: vertices }, () => [])
  for (let e = 0; e < cliques; e++) {
    const own = graph.clique.slice(graph.cliqueStart[e], graph.cliqueStart[e + 1])
    members.push(own)
    elementSize.push(own.reduce((sum, v) => sum + weight[v], 0))
    for (const v of own) elementsOf[v].push(e)
  }
  // a principal vertex stands for all vertices that became indistinguishable from it
  const merged: number[][] = Array.from({ length: vertices }, (_, v) => [v])
  const size = Int32Array.from(weight)
  const alive = new Uint8Array(vertices).fill(1)
  const degree = new Int32Array(vertices)
  for (let v = 0; v < vertices; v++) {
    for (const e of elementsOf[v]) degree[v] += elementSize[e] - weight[v]
  }
  const queue = degreeLists(degree)

  const fronts: Front[] = []
  const stamp = new Int32Array(vertices).fill(-1)
  const outside: number[] = [] // of each element: dofs outside the front, valid where outsideStamp is the front's number
  const outsideStamp: number[] = []
  for (let pivot = queue.pop(); pivot >= 0; pivot = queue.pop()) {
    const number = fronts.length
    const own = cliques + number
    const absorbed = [...elementsOf[pivot]]
    const rest: number[] = []
    stamp[pivot] = number
    for (const e of absorbed) {
      for (const v of members[e]!) {
        if (!alive[v] || stamp[v] === number) continue
        stamp[v] = number
        rest.push(v)
      }
      members[e] = null
    }
    alive[pivot] = 0
    const pivots = [...merged[pivot]]

    // what every touched element has outside this front; one with nothing outside is assembled here too
    let frontSize = 0
    for (const v of rest) {
      frontSize += size[v]
      elementsOf[v] = elementsOf[v].filter((e) => members[e] !== null)
      for (const e of elementsOf[v]) {
        if (outsideStamp[e] !== number) {
          outsideStamp[e] = number
          outside[e] = elementSize[e]
        }
        outside[e] -= size[v]
        if (outside[e] === 0) {
          absorbed.push(e)
          members[e] = null
        }
      }
    }

    const stays: number[] = []
    const byHash = new Map<number, number[]>()
    for (const v of rest) {
      const elements = elementsOf[v].filter((e) => members[e] !== null)
      elementsOf[v] = elements
      if (elements.length === 0) {
        // nothing outside the front holds it back
        queue.remove(v)
        alive[v] = 0
        frontSize -= size[v]
        pivots.push(...merged[v])
        continue
      }
      const hash = elements.reduce((sum, e) => sum + e, 0)
      const twins = byHash.get(hash) ?? []
      const twin = twins.find((u) => sameElements(elementsOf[u], elements))
      if (twin === undefined) {
        byHash.set(hash, [...twins, v])
        stays.push(v)
        continue
      }
      queue.remove(v)
      alive[v] = 0
      merged[twin].push(...merged[v])
      size[twin] += size[v]
    }
    for (const v of stays) {
      let approximate = frontSize - size[v]
      for (const e of elementsOf[v]) approximate += outside[e]
      elementsOf[v].push(own)
      queue.move(v, approximate)
    }
    members.push(Int32Array.from(stays))
    elementSize.push(frontSize)
    fronts.push({
      pivots: Int32Array.from(pivots),
      rest: Int32Array.from(stays.flatMap((v) => merged[v])),
      children: absorbed.filter((e) => e >= cliques).map((e) => e - cliques),
      cliques: absorbed.filter((e) => e < cliques)
    })
  }
  return fronts
}

/** True when two ascending lists are equal. */
function sameElements(a: readonly number[], b: readonly number[]): boolean {
  return a.length === b.length && a.every((e, i) => e === b[i])
}

/** Vertices by degree: doubly linked lists, the lowest degree first, in a list the last that came first. */
function degreeLists(initial: Int32Array) {
  const count = initial.length
  const degree = Int32Array.from(initial)
  let heads = new Int32Array(1024).fill(-1)
  const next = new Int32Array(count).fill(-1)
  const previous = new Int32Array(count).fill(-1)
  let lowest = 0
  const insert = (v: number): void => {
    const d = degree[v]
    if (d >= heads.length) {
      const larger = new Int32Array(Math.max(2 * heads.length, d + 1)).fill(-1)
      larger.set(heads)
      heads = larger
    }
    next[v] = heads[d]
    previous[v] = -1
    if (heads[d] >= 0) previous[heads[d]] = v
    heads[d] = v
    if (d < lowest) lowest = d
  }
  const remove = (v: number): void => {
    if (previous[v] >= 0) next[previous[v]] = next[v]
    else heads[degree[v]] = next[v]
    if (next[v] >= 0) previous[next[v]] = previous[v]
  }
  for (let v = count - 1; v >= 0; v--) insert(v)
  return {
    remove,
    /** Takes a vertex of lowest degree out, -1 when none is left. */
    pop(): number {
      while (lowest < heads.length && heads[lowest] < 0) lowest++
      if (lowest >= heads.length) return -1
      const v = heads[lowest]
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
