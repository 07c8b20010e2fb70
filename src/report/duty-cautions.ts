import type { Duty } from "../model/duty.js";
import { type Caution, cautionsOf } from "./cautions.js";
import type { CautionTriggers } from "./input.js";

/** Which cautions of the trade the duties call for by themselves. */
export function dutyTriggers(duties: readonly Duty[]): CautionTriggers {
  const kill = duties.some((d) => d.regulated || d.report.some((r) => r.what === "log-removal"));
  const heat = duties.some((d) => d.heat !== undefined);
  return { ...(kill ? { disinfection: true } : {}), ...(heat ? { heat: true } : {}) };
}

/** What the figures of one duty must not be used for without more. */
export const dutyCautions = (duty: Duty): readonly Caution[] => cautionsOf(dutyTriggers([duty]));
