import type { Study } from "../model/study.js";
import { betterIs } from "./direction.js";
import type { ChangeOutcome, Choice, Decision, Ranked } from "./result.js";

/**
 * Decisions for every figure that has a better side, by every rival that survives.
 * @see K. P. Burnham & D. R. Anderson, Model Selection and Multimodel Inference, 2nd ed., Springer (2002), chapter 4 (averaging over models)
 */
export function decisionsOf(study: Study, survivors: readonly Ranked[], changes: readonly ChangeOutcome[]): Decision[] {
  const whole = survivors.reduce((s, r) => s + r.standing.weight, 0);
  if (changes.length === 0 || !(whole > 0)) return [];
  return study.duties.flatMap((duty, d) =>
    duty.report.flatMap((reported, line): Decision[] => {
      const sign = betterIs(duty, line);
      if (sign === 0) return [];
      const told = (r: Ranked) =>
        changes
          .filter((c) => c.rival === r.rival)
          .flatMap(({ change, figures }) =>
            figures
              .filter((f) => f.duty.path === duty.path && f.name === reported.text)
              .map((f) => ({ change, gain: sign * (f.value - f.before), probabilityBetter: f.probabilityBetter })),
          );
      const choices = survivors.map((r): Choice => {
        const weight = r.standing.weight / whole;
        const good = told(r).filter((t) => t.gain > 0 && (t.probabilityBetter ?? 1) > 0.5);
        const best = good.reduce<(typeof good)[number] | undefined>(
          (a, b) => (!a || b.gain > a.gain ? b : a),
          undefined,
        );
        return best
          ? { rival: r.rival, weight, ...best }
          : { rival: r.rival, weight, change: undefined, gain: 0, probabilityBetter: undefined };
      });
      if (survivors.every((r) => told(r).length === 0)) return [];
      const averaged = study.changes.flatMap((change) => {
        const known = survivors.flatMap((r) => {
          const p = told(r).find((t) => t.change === change)?.probabilityBetter;
          return p === undefined ? [] : [{ p, weight: r.standing.weight }];
        });
        const sum = known.reduce((s, k) => s + k.weight, 0);
        return sum > 0 ? [{ change, probabilityBetter: known.reduce((s, k) => s + (k.weight * k.p) / sum, 0) }] : [];
      });
      return [
        {
          duty: d,
          line,
          name: reported.text,
          choices,
          flips: choices.some((c) => c.change !== choices[0].change),
          averaged: averaged.sort((a, b) => b.probabilityBetter - a.probabilityBetter),
        },
      ];
    }),
  );
}
