import { radauIntegrator } from "../numerics/stiff.js";
import type { Kinetics } from "../reaction/kinetics.js";
import { type PieceBasis, Pieces } from "./pieces.js";

const tolerance = { relative: 1e-11, absolute: 1e-14 };
const mostSteps = 100_000;

/**
 * A maker of trajectories: what becomes of a mixture that stays by itself, as polynomials over its age (s).
 * @returns undefined where it cannot be followed
 */
export function trajectories(
  kinetics: Kinetics,
  basis: PieceBasis,
): (mixture: Float64Array, until: number) => Pieces | undefined {
  const n = kinetics.size;
  const integrator = radauIntegrator(
    {
      size: n,
      rhs: (_, y, dy) => kinetics.production(y, 0, dy, 0),
      jacobian(_, y, entries) {
        kinetics.jacobian(y, 0, entries, 0);
        // Less than nothing counts as none: there rates do not move.
        for (let j = 0; j < n; j++) if (y[j] < 0) for (let i = 0; i < n; i++) entries[i * n + j] = 0;
      },
    },
    tolerance.relative,
    basis.stages,
  );
  return (mixture, until) => {
    const pieces = new Pieces(basis, n);
    const y = mixture.slice();
    if (!(until > 0)) {
      pieces.add(0, 1, (_, into, at) => into.set(y, at));
      return pieces;
    }
    const { halt } = integrator(
      {
        rhs: () => undefined,
        from: 0,
        to: until,
        ...tolerance,
        maxSteps: mostSteps,
        outputs: [],
        accepted(t, h, start, z) {
          pieces.add(t, h, (p, into, at) => {
            for (let i = 0; i < n; i++) into[at + i] = start[i] + (p === 0 ? 0 : z[p - 1][i]);
          });
          return false;
        },
      },
      y,
      () => undefined,
    );
    return halt ? undefined : pieces;
  };
}
