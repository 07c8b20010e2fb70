import { eigenvalues } from "../numerics/eigenvalues.js";
import { factor, solve } from "../numerics/lu.js";
import { blockMatrix } from "./block-matrix.js";
import { delayedMode } from "./characteristic.js";
import type { GroupBalance } from "./group.js";
import type { Mode } from "./mode.js";

export type { Mode } from "./mode.js";

const mostComponents = 400;

/**
 * The mode of a group that grows fastest, or fades slowest. Of cells and joints: eigenvalues of the balances in time, joints
 * eliminated; with tubes and bodies of parcels: zeros of the determinant of the balances in the Laplace variable.
 * @param fully with such bodies, find the growth; else only whether it grows
 * @returns undefined where the group holds other bodies, is too large, or no eigenvalues could be had
 */
export function slowestMode(balance: GroupBalance, y: Float64Array, fully = true): Mode | undefined {
  const { count, size: n, memory } = balance;
  if (count * n > mostComponents) return undefined;
  if (!balance.onlyCells) {
    const disturbed = balance.disturbed(y);
    return disturbed && delayedMode(disturbed, fully);
  }
  const m = blockMatrix(count, n);
  if (!balance.jacobian(y, m)) return undefined;
  const cells: number[] = [];
  const joints: number[] = [];
  for (let k = 0; k < count * n; k++) (memory[Math.floor(k / n)] > 0 ? cells : joints).push(k);
  const at = (i: number, j: number): number =>
    m.rows[Math.floor(i / n)].get(Math.floor(j / n))?.[(i % n) * n + (j % n)] ?? 0;
  const size = cells.length;
  const rates = new Float64Array(size * size);
  cells.forEach((i, r) => {
    cells.forEach((j, c) => {
      rates[r * size + c] = at(i, j) / memory[Math.floor(i / n)];
    });
  });
  if (joints.length > 0) {
    const own = Float64Array.from({ length: joints.length ** 2 }, (_, e) =>
      at(joints[Math.floor(e / joints.length)], joints[e % joints.length]),
    );
    const lu = factor(own, joints.length);
    if (lu === "singular") return undefined;
    cells.forEach((j, c) => {
      const column = Float64Array.from(joints, (q) => at(q, j));
      solve(lu, column);
      cells.forEach((i, r) => {
        let sum = 0;
        joints.forEach((q, k) => {
          sum += at(i, q) * column[k];
        });
        rates[r * size + c] -= sum / memory[Math.floor(i / n)];
      });
    });
  }
  const found = size > 0 ? eigenvalues(rates, size) : undefined;
  if (!found) return undefined;
  const k = found.real.reduce((best, x, i) => (x > found.real[best] ? i : best), 0);
  return { growth: found.real[k], swing: Math.abs(found.imaginary[k]) };
}
