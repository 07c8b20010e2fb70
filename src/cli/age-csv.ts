import type { MomentsResult } from "../data/result.js";
import { inUnit } from "../units/unit.js";

/** E, F, W with the standard error of both, internal age and intensity of every reading as CSV; empty where there is no number. */
export function ageCurvesCsv({ readings }: MomentsResult): string {
  const time = readings[0]?.timeUnit.name ?? "s";
  const per = `1/${time}`;
  const head = ["at", `time [${time}]`, `E [${per}]`, "F", "W", "standard error of F", `I [${per}]`, `L [${per}]`];
  const rows = readings.flatMap(({ at, curve, timeUnit }) =>
    curve
      ? Array.from(curve.time, (t, i) => {
          const density = (x: number | undefined): number => (x ?? Number.NaN) * timeUnit.factor;
          const { E, F, error, I, L } = curve;
          return [
            at,
            ...[inUnit(t, timeUnit), density(E[i]), F[i], 1 - F[i], error[i], density(I?.[i]), density(L[i])].map(
              (x) => (Number.isFinite(x) ? String(x) : ""),
            ),
          ];
        })
      : [],
  );
  const cell = (text: string): string => (/[",\n\r]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text);
  return `${[head, ...rows].map((r) => r.map(cell).join(",")).join("\n")}\n`;
}
