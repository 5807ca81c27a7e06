// Sparse Cholesky for sums of element matrices: a small library that knows nothing of plates.

export type { CliqueGraph } from './graph.ts'
export { analyse, factorise, SingularError, solveFactor, type Factor, type Symbolic } from './cholesky.ts'
export { solveRefined, type Refined } from './refine.ts'
