import { compile } from "../../compile/compile.js";
import { plotCurves } from "../../draw/curves.js";
import { asItStands } from "../../fit/as-it-stands.js";
import type { Study } from "../../model/study.js";
import { inUnit } from "../../units/unit.js";
import type { Figure } from "../input.js";
import { diagram } from "./network-figures.js";

/** Every rival over every trial at the values of their files, then the rivals' diagrams. Nothing is fitted. */
export function studyFigures(study: Study): Figure[] {
  const curves = study.trials.flatMap((trial, k): Figure[] => {
    const time = study.rivals[0]?.network.units.time;
    const start = trial.injections[0]?.start ?? 0;
    const runs = study.rivals.flatMap(({ network, path }) => {
      const first = asItStands(network, trial)?.find((r) => !r.of?.steady);
      return first ? [{ label: fileName(path), first }] : [];
    });
    if (!time || runs.length === 0) return [];
    const measured = runs[0].first;
    const x = measured.time.map((t) => inUnit(t - start, time));
    return [
      {
        name: `trial-${k + 1}`,
        ...plotCurves(
          {
            title: trial.title,
            x: `time since the ${trial.reacting ? "start" : "injection"}, ${time.name}`,
            y: `${measured.of?.name ?? "tracer"}, ${measured.unit.name}`,
            points: { x, y: measured.measured.map((c) => inUnit(c, measured.unit)) },
            lines: runs.map(({ label, first }) => ({ label, x, y: first.fitted.map((c) => inUnit(c, first.unit)) })),
          },
          { untitled: true },
        ),
        caption: `${trial.title}, at '${measured.at}': readings and every rival at the values of its file; nothing is fitted yet.`,
      },
    ];
  });
  const rivals = study.rivals.flatMap(({ network }, k): Figure[] => {
    const { plant } = compile(network);
    return plant ? [diagram(plant, `rival-${k + 1}`)] : [];
  });
  return [...curves, ...rivals];
}

const fileName = (path: string): string => (path.split("/").at(-1) ?? path).replace(/\.ya?ml$/, "");
