import type { Chemistry } from "../model/chemistry.js";
import type { Report } from "../problems/report.js";
import { formatNumber } from "../units/format.js";

/** Molar masses are given with so few digits that sums may differ by this share. */
const slack = 5e-3;

/** Warns of equations whose two sides differ in mass, where all their species have a molar mass. */
export function massKept({ species, reactions }: Chemistry, report: Report): void {
  for (const { counts, makes, text, at } of reactions) {
    if (counts !== "molecules") continue;
    const masses = makes.map((m) => m.number([]) * (species[m.species].molarMass?.of([]) ?? Number.NaN));
    const side = (sign: number): number => masses.reduce((sum, m) => sum + Math.max(0, sign * m), 0);
    if (masses.some(Number.isNaN) || Math.abs(side(1) - side(-1)) <= slack * Math.max(side(1), side(-1))) continue;
    const grams = (x: number): string => `${formatNumber(1000 * x, 4)} g`;
    report("mass-not-kept", at, { text, left: grams(side(-1)), right: grams(side(1)) });
  }
}
