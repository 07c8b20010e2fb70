import type { nextTurns, Turn } from "../../reaction/branches.js";
import type { BranchPlot } from "../../report/study/branch-figure.js";
import { inUnit } from "../../units/unit.js";
import { finite, quantity, unitName } from "./quantity.js";
import { reportedJson } from "./steady.js";

/** Branches of steady states over an input, and where they end. */
export function branchesJson(plot: BranchPlot, next: ReturnType<typeof nextTurns>): Record<string, unknown> {
  const { input, found, figuresAt } = plot;
  const turnJson = (turn: Turn) => ({
    at: quantity(turn.at, input.unit),
    what: turn.what,
    ...(turn.of === undefined ? {} : { of: turn.of }),
    as: turn.as,
    report: figuresAt({ at: turn.at, state: turn.state, stable: undefined }).map((f) => ({
      name: f.name,
      ...reportedJson(f),
    })),
  });
  return {
    statesOver: {
      name: input.name,
      now: quantity(input.value, input.unit),
      turns: found.turns.map(turnJson),
      next: {
        rising: next.rising ? turnJson(next.rising) : null,
        falling: next.falling ? turnJson(next.falling) : null,
      },
      branches: found.branches.map((points) => {
        const figures = points.map(figuresAt);
        return {
          values: { unit: unitName(input.unit), values: points.map((p) => finite(inUnit(p.at, input.unit))) },
          stable: points.map((p) => p.stable ?? null),
          report: (figures[0] ?? []).map((f, k) => ({
            name: f.name,
            unit: unitName(f.unit),
            values: figures.map((own) => finite(inUnit(own[k].value, f.unit))),
          })),
        };
      }),
      notFollowed: found.left,
    },
  };
}
