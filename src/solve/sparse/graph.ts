// The pattern of a matrix that is a sum of element matrices: blocks of dofs and the cliques of blocks that couple.

/** Blocks 0 .. vertices - 1, the dofs of each contiguous, in block order; clique e couples all its blocks with one another. */
export interface CliqueGraph {
  readonly vertices: number
  /** cliques + 1 positions into `clique`. */
  readonly cliqueStart: Int32Array
  readonly clique: Int32Array
  /** Dofs of each block, at least 1. */
  readonly weight: Int32Array
}

/** First dof of each block, and the number of dofs at the end (vertices + 1 numbers). */
export function blockStarts({ vertices, weight }: CliqueGraph): Int32Array {
  const start = new Int32Array(vertices + 1)
  for (let v = 0; v < vertices; v++) start[v + 1] = start[v] + weight[v]
  return start
}

/** Dofs of clique e in its own order of blocks: the rows and columns of its element matrix. */
export function cliqueDofs(graph: CliqueGraph, start: Int32Array, e: number): Int32Array {
  const dofs: number[] = []
  for (let i = graph.cliqueStart[e]; i < graph.cliqueStart[e + 1]; i++) {
    const block = graph.clique[i]
    for (let d = start[block]; d < start[block + 1]; d++) dofs.push(d)
  }
  return Int32Array.from(dofs)
}
