// Invariants of a plane stress state [sxx, syy, sxy], tension positive.

export type StressState = readonly [sxx: number, syy: number, sxy: number]

/** s1 >= s2 = (sxx + syy)/2 +- sqrt(((sxx - syy)/2)^2 + sxy^2). */
export function principalStresses([sxx, syy, sxy]: StressState): [s1: number, s2: number] {
  const mean = (sxx + syy) / 2
  const radius = Math.hypot((sxx - syy) / 2, sxy)
  return [mean + radius, mean - radius]
}

/** sqrt(sxx^2 - sxx syy + syy^2 + 3 sxy^2): R. von Mises, Nachr. Ges. Wiss. Goettingen (1913) 582, in plane stress. */
export function vonMises([sxx, syy, sxy]: StressState): number {
  return Math.sqrt(sxx * sxx - sxx * syy + syy * syy + 3 * sxy * sxy)
}
