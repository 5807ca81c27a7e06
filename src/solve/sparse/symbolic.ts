// Symbolic factorisation: from the order of elimination to the fronts of a multifrontal Cholesky, with all sizes exact.
// Elimination tree and supernodes: J.W.H. Liu, SIAM J. Matrix Anal. Appl. 11 (1990) 134; J.W.H. Liu, E.G. Ng, B.W. Peyton, 14
// (1993) 242. Order of siblings for the smallest stack: J.W.H. Liu, ACM TOMS 12 (1986) 249. All of it in blocks of dofs; single
// dofs appear only in the result.

import { blockStarts, type CliqueGraph } from './graph.ts'
import { orderMinimumDegree } from './ordering.ts'

/**
 * All that the pattern determines; serves every matrix with this pattern.
 * Positions 0 .. n - 1 count dofs in the order of elimination. Fronts are numbered so that children come before their parents and
 * a front's pivots are consecutive positions: front f eliminates pivotStart[f] .. pivotStart[f + 1] - 1.
 */
export interface Symbolic {
  readonly graph: CliqueGraph
  readonly n: number
  /** The dof at each position (n numbers). */
  readonly order: Int32Array
  /** The position of each dof (n numbers). */
  readonly position: Int32Array
  readonly fronts: number
  /** fronts + 1 positions. */
  readonly pivotStart: Int32Array
  /** Positions of each front's other rows, ascending: `row` from rowStart[f] (fronts + 1 numbers). */
  readonly rowStart: Int32Array
  readonly row: Int32Array
  /** How many children each front has; they are the roots of the subtrees that end just before it. */
  readonly children: Int32Array
  /** Cliques assembled in each front: `frontClique` from frontCliqueStart[f] (fronts + 1 numbers). */
  readonly frontCliqueStart: Int32Array
  readonly frontClique: Int32Array
  /** Dofs of each clique, the rows of its element matrix: `cliqueDof` from cliqueDofStart[e] (cliques + 1 numbers). */
  readonly cliqueDofStart: Int32Array
  readonly cliqueDof: Int32Array
  /** Where each front's part of L begins (fronts + 1 numbers): (pivots + rows) times pivots entries. */
  readonly lowerStart: Int32Array
  /** Most entries of update matrices that are alive at a time, the one being made included. */
  readonly stackSize: number
  /** Entries of the lower triangle of L, diagonal included, blocks counted as full; without the zeros of merged supernodes. */
  readonly nnzL: number
  /** Floating-point operations of that factor: the sum of the squares of its columns' entries. */
  readonly flops: number
}

/** Supernodes as they are found, children before parents. Their blocks are numbered by their place in the order of elimination. */
interface Supernodes {
  readonly count: number
  /** Blocks of supernode s, ascending: `block` from start[s]; the first pivots[s] are eliminated in it. */
  readonly block: Int32Array
  readonly start: Int32Array
  readonly pivots: Int32Array
  /** Dofs of its pivots, and of all its blocks. */
  readonly pivotDofs: Int32Array
  readonly dofs: Int32Array
  /** The supernode in which its first other block is eliminated, -1 of a root. */
  readonly parent: Int32Array
}

/**
 * Fronts and sizes of the factor.
 * @param order block numbers in the order of elimination, a permutation of 0 .. vertices - 1
 */
export function analyse(graph: CliqueGraph, order = orderMinimumDegree(graph)): Symbolic {
  const { vertices, weight } = graph
  const place = new Int32Array(vertices)
  for (let i = 0; i < vertices; i++) place[order[i]] = i
  const cliques = sortedByFirst(graph, place)
  const nodes = findSupernodes(graph, order, place, cliques)
  let nnzL = 0
  let flops = 0
  for (let s = 0; s < nodes.count; s++) {
    nnzL += entries(nodes.dofs[s], nodes.pivotDofs[s])
    flops += operations(nodes.dofs[s], nodes.pivotDofs[s])
  }
  const host = mergeSupernodes(nodes)
  const { sequence, children, stackSize } = walkOrder(nodes, host)

  // number the dofs front by front
  const fronts = sequence.length
  const frontOf = new Int32Array(nodes.count)
  sequence.forEach((s, f) => (frontOf[s] = f))
  for (let s = 0; s < nodes.count; s++) frontOf[s] = frontOf[host[s]]
  const inFront = bucketsOf(frontOf, fronts)
  const start = blockStarts(graph)
  const n = start[vertices]
  const dofAt = new Int32Array(n)
  const position = new Int32Array(n)
  const first = new Int32Array(vertices) // position of the first dof of the block at each place
  const frontAt = new Int32Array(vertices)
  const pivotStart = new Int32Array(fronts + 1)
  let at = 0
  for (let f = 0; f < fronts; f++) {
    for (let k = inFront.start[f]; k < inFront.start[f + 1]; k++) {
      const s = inFront.item[k]
      for (let i = nodes.start[s]; i < nodes.start[s] + nodes.pivots[s]; i++) {
        const block = order[nodes.block[i]]
        first[nodes.block[i]] = at
        frontAt[nodes.block[i]] = f
        for (let d = start[block]; d < start[block + 1]; d++) {
          dofAt[at] = d
          position[d] = at++
        }
      }
    }
    pivotStart[f + 1] = at
  }

  // the other rows of each front: ancestors, whose order is the same in every numbering of the tree
  const rowStart = new Int32Array(fronts + 1)
  const lowerStart = new Int32Array(fronts + 1)
  sequence.forEach((s, f) => {
    const rows = nodes.dofs[s] - nodes.pivotDofs[s]
    const pivots = pivotStart[f + 1] - pivotStart[f]
    rowStart[f + 1] = rowStart[f] + rows
    lowerStart[f + 1] = lowerStart[f] + (pivots + rows) * pivots
  })
  const row = new Int32Array(rowStart[fronts])
  at = 0
  for (const s of sequence) {
    for (let i = nodes.start[s] + nodes.pivots[s]; i < nodes.start[s + 1]; i++) {
      const b = nodes.block[i]
      for (let k = 0; k < weight[order[b]]; k++) row[at++] = first[b] + k
    }
  }

  const assembledIn = new Int32Array(graph.cliqueStart.length - 1)
  for (let b = 0; b < vertices; b++) {
    for (let k = cliques.start[b]; k < cliques.start[b + 1]; k++) assembledIn[cliques.item[k]] = frontAt[b]
  }
  const assembled = bucketsOf(assembledIn, fronts)
  return {
    graph,
    n,
    order: dofAt,
    position,
    fronts,
    pivotStart,
    rowStart,
    row,
    children,
    frontCliqueStart: assembled.start,
    frontClique: assembled.item,
    ...cliqueDofs(graph, start),
    lowerStart,
    stackSize,
    nnzL,
    flops
  }
}

/** Entries of L in a front of n rows and p pivots: a trapezium. */
function entries(n: number, p: number): number {
  return n * p - (p * (p - 1)) / 2
}

/** Operations of a front of n rows and p pivots: n^2 + (n - 1)^2 + ... + (n - p + 1)^2. */
function operations(n: number, p: number): number {
  const sumOfSquares = (m: number): number => (m * (m + 1) * (2 * m + 1)) / 6
  return sumOfSquares(n) - sumOfSquares(n - p)
}

/** Items 0, 1, ... grouped by the key of each, in order: those with key k are `item` from start[k] (keys + 1 numbers). */
function bucketsOf(key: Int32Array, keys: number): { start: Int32Array; item: Int32Array } {
  const start = new Int32Array(keys + 1)
  for (const k of key) start[k + 1]++
  for (let k = 0; k < keys; k++) start[k + 1] += start[k]
  const next = start.slice()
  const item = new Int32Array(key.length)
  for (let i = 0; i < key.length; i++) item[next[key[i]]++] = i
  return { start, item }
}

/** Cliques by the place of their block that is eliminated first. */
function sortedByFirst({ vertices, cliqueStart, clique }: CliqueGraph, place: Int32Array) {
  const first = new Int32Array(cliqueStart.length - 1)
  for (let e = 0; e < first.length; e++) {
    first[e] = place[clique[cliqueStart[e]]]
    for (let i = cliqueStart[e] + 1; i < cliqueStart[e + 1]; i++) first[e] = Math.min(first[e], place[clique[i]])
  }
  return bucketsOf(first, vertices)
}

function cliqueDofs({ cliqueStart, clique, weight }: CliqueGraph, start: Int32Array) {
  const cliques = cliqueStart.length - 1
  const cliqueDofStart = new Int32Array(cliques + 1)
  for (let e = 0; e < cliques; e++) {
    cliqueDofStart[e + 1] = cliqueDofStart[e]
    for (let i = cliqueStart[e]; i < cliqueStart[e + 1]; i++) cliqueDofStart[e + 1] += weight[clique[i]]
  }
  const cliqueDof = new Int32Array(cliqueDofStart[cliques])
  let at = 0
  for (const block of clique) {
    for (let d = start[block]; d < start[block + 1]; d++) cliqueDof[at++] = d
  }
  return { cliqueDofStart, cliqueDof }
}

/**
 * Fundamental supernodes: a block joins its only child when it brings no row that the child does not have; otherwise it begins a
 * supernode whose rows are those of its cliques and of its children's updates.
 */
function findSupernodes(
  graph: CliqueGraph,
  order: Int32Array,
  place: Int32Array,
  cliques: { start: Int32Array; item: Int32Array }
): Supernodes {
  const { vertices, cliqueStart, clique, weight } = graph
  const start = new Int32Array(vertices + 1)
  const pivots = new Int32Array(vertices)
  const pivotDofs = new Int32Array(vertices)
  const dofs = new Int32Array(vertices)
  const parent = new Int32Array(vertices).fill(-1)
  // supernodes whose next block is b, as a chain
  const waiting = new Int32Array(vertices).fill(-1)
  const alsoWaiting = new Int32Array(vertices)
  const seen = new Int32Array(vertices).fill(-1)
  let block = new Int32Array(4 * clique.length + 16)
  let count = 0

  /** True when every block of the cliques that begin at b is among the blocks of supernode s. */
  const addsNothing = (b: number, s: number): boolean => {
    if (cliques.start[b] === cliques.start[b + 1]) return true
    for (let i = start[s]; i < start[s + 1]; i++) seen[block[i]] = b
    for (let k = cliques.start[b]; k < cliques.start[b + 1]; k++) {
      const e = cliques.item[k]
      for (let i = cliqueStart[e]; i < cliqueStart[e + 1]; i++) if (seen[place[clique[i]]] !== b) return false
    }
    return true
  }
  for (let b = 0; b < vertices; b++) {
    let s = waiting[b]
    if (s < 0 || alsoWaiting[s] >= 0 || !addsNothing(b, s)) {
      const from = start[count]
      let room = 1
      for (let c = waiting[b]; c >= 0; c = alsoWaiting[c]) room += start[c + 1] - start[c]
      for (let k = cliques.start[b]; k < cliques.start[b + 1]; k++) room += cliqueStart[cliques.item[k] + 1] - cliqueStart[cliques.item[k]]
      if (from + room > block.length) {
        const larger = new Int32Array(2 * (from + room))
        larger.set(block)
        block = larger
      }
      // stamps of b may stand on blocks of the supernode that b did not join: those of this union lie beyond
      const stamp = vertices + b
      seen[b] = stamp
      block[from] = b
      let to = from + 1
      for (let c = waiting[b]; c >= 0; c = alsoWaiting[c]) {
        parent[c] = count
        for (let i = start[c] + pivots[c]; i < start[c + 1]; i++) {
          if (seen[block[i]] === stamp) continue
          seen[block[i]] = stamp
          block[to++] = block[i]
        }
      }
      for (let k = cliques.start[b]; k < cliques.start[b + 1]; k++) {
        const e = cliques.item[k]
        for (let i = cliqueStart[e]; i < cliqueStart[e + 1]; i++) {
          const p = place[clique[i]]
          if (seen[p] === stamp) continue
          seen[p] = stamp
          block[to++] = p
        }
      }
      block.subarray(from, to).sort()
      s = count++
      start[count] = to
      for (let i = from; i < to; i++) dofs[s] += weight[order[block[i]]]
    }
    pivots[s]++
    pivotDofs[s] += weight[order[b]]
    const following = start[s] + pivots[s]
    if (following < start[s + 1]) {
      alsoWaiting[s] = waiting[block[following]]
      waiting[block[following]] = s
    }
  }
  return { count, block, start, pivots, pivotDofs, dofs, parent }
}

// What a front costs besides its operations, in operations: each entry of its update is cleared, added to and passed on, and
// there is a fixed share of calls and short loops.
const COST_OF_ENTRY = 6
const COST_OF_FRONT = 1000

function costOf(n: number, p: number): number {
  return operations(n, p) + COST_OF_ENTRY * entries(n - p, n - p) + COST_OF_FRONT
}

/**
 * Merges a supernode into its parent where one larger front, zeros of L and all, is cheaper than two (relaxed supernodes:
 * C. Ashcraft, R. Grimes, ACM TOMS 15 (1989) 291). Changes pivotDofs and dofs of the hosts in place.
 * Returns for each supernode the one that it is part of, itself if it stays.
 */
function mergeSupernodes({ count, pivotDofs, dofs, parent }: Supernodes): Int32Array {
  const host = Int32Array.from({ length: count }, (_, s) => s)
  const children = bucketsOf(parent.subarray(0, count).map((p) => (p < 0 ? count : p)), count + 1)
  for (let s = 0; s < count; s++) {
    // the last child first: it has the most rows in common with s
    for (let k = children.start[s + 1] - 1; k >= children.start[s]; k--) {
      const c = children.item[k]
      const together = costOf(pivotDofs[c] + dofs[s], pivotDofs[c] + pivotDofs[s])
      if (together > costOf(dofs[c], pivotDofs[c]) + costOf(dofs[s], pivotDofs[s])) continue
      host[c] = s
      dofs[s] += pivotDofs[c]
      pivotDofs[s] += pivotDofs[c]
    }
  }
  for (let s = count - 1; s >= 0; s--) host[s] = host[host[s]]
  return host
}

/** The supernodes that stay, children before parents and siblings in the order that keeps the stack of updates smallest. */
function walkOrder({ count, pivotDofs, dofs, parent }: Supernodes, host: Int32Array) {
  const update = (s: number): number => entries(dofs[s] - pivotDofs[s], dofs[s] - pivotDofs[s])
  const childrenOf: number[][] = Array.from({ length: count }, () => [])
  const roots: number[] = []
  // entries on the stack while the subtree of s is worked off
  const most = new Float64Array(count)
  const stack = (list: number[]): number => {
    list.sort((a, b) => most[b] - update(b) - (most[a] - update(a)) || a - b)
    let waiting = 0
    let peak = 0
    for (const c of list) {
      peak = Math.max(peak, waiting + most[c])
      waiting += update(c)
    }
    return Math.max(peak, waiting)
  }
  for (let s = 0; s < count; s++) {
    if (host[s] !== s) continue
    const waiting = childrenOf[s].reduce((sum, c) => sum + update(c), 0)
    most[s] = Math.max(stack(childrenOf[s]), waiting + update(s))
    const above = parent[s] < 0 ? roots : childrenOf[host[parent[s]]]
    above.push(s)
  }
  const stackSize = stack(roots)

  const sequence: number[] = []
  const pending = roots.toReversed()
  const opened = new Uint8Array(count)
  while (pending.length > 0) {
    const s = pending[pending.length - 1]
    if (opened[s]) {
      sequence.push(pending.pop()!)
      continue
    }
    opened[s] = 1
    for (let i = childrenOf[s].length - 1; i >= 0; i--) pending.push(childrenOf[s][i])
  }
  return { sequence, children: Int32Array.from(sequence, (s) => childrenOf[s].length), stackSize }
}
