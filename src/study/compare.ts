import { compile } from "../compile/compile.js";
import type { Duty } from "../model/duty.js";
import type { ChangeDocument } from "../model/study.js";
import { changedVessel } from "./changed.js";
import { betterIs } from "./direction.js";
import type { RivalDraws } from "./draws-of.js";
import { type Operation, operate } from "./operate.js";
import type { ChangedFigure, ChangeOutcome, Ranked } from "./result.js";
import { type Sample, sampledFigures } from "./sample.js";
import { rowsFor } from "./sources.js";
import { interval95 } from "./spread.js";

/**
 * A change on a ranked rival: every duty's figures before and after, with draws shared between the two, so that the
 * difference is known better than either.
 */
export function changeOutcomes(
  ranked: Ranked,
  change: ChangeDocument,
  present: ReadonlyMap<Duty, Sample>,
  draws: RivalDraws,
  seed: number,
): ChangeOutcome {
  const { rival, fit } = ranked;
  const left = (skipped: string): ChangeOutcome => ({ change, rival, skipped, plant: undefined, figures: [] });
  const changed = changedVessel(rival, change, fit?.values ?? {});
  if ("skipped" in changed) return left(changed.skipped);
  const { plant, problems } = compile(changed.network, changed.values);
  if (!plant) return left(problems[0]?.message ?? "the changed vessel does not balance");
  const after = changed.drawn(draws.settings, seed);
  const figures = [...present].flatMap(([duty, sample]): ChangedFigure[] => {
    const today = sample.operation;
    const then: Operation = { ...today, network: changed.network, values: changed.values };
    const [old, now] = [operate(today).figures, operate(then).figures];
    if (!old || !now) return [];
    const was = sample.values;
    const is = sampledFigures(then, rowsFor(then, after, seed));
    return now.map((f, k): ChangedFigure => {
      const pairs = was.flatMap((w, i) => (w && is[i] ? [[w[k], (is[i] as number[])[k]] as const] : []));
      const differences = pairs.map(([a, b]) => b - a).filter(Number.isFinite);
      const sign = betterIs(duty, k);
      return {
        duty,
        name: f.name,
        unit: f.unit,
        before: old[k].value,
        value: f.value,
        interval95: interval95(pairs.map(([, b]) => b)),
        difference95: interval95(differences),
        probabilityBetter:
          sign === 0 || differences.length === 0
            ? undefined
            : differences.filter((d) => d * sign > 0).length / differences.length,
      };
    });
  });
  return { change, rival, skipped: undefined, plant, figures };
}
