// The units of case files, in N, mm and MPa.

/** Millimetres. The inch is 25.4 mm exactly (international inch, 1959). */
export const LENGTH_UNITS = { mm: 1, cm: 10, m: 1000, in: 25.4 } as const

/** Newtons. The pound-force is 4.4482216152605 N exactly (international pound, standard gravity 9.80665 m/s^2). */
export const FORCE_UNITS = { N: 1, kN: 1000, lbf: 4.4482216152605, kip: 4448.2216152605 } as const

/** Megapascals; psi and ksi follow from lbf and in. */
export const STRESS_UNITS = {
  Pa: 1e-6,
  MPa: 1,
  GPa: 1000,
  psi: 4.4482216152605 / 25.4 ** 2,
  ksi: 4448.2216152605 / 25.4 ** 2
} as const
