import type { Duty } from "../../model/duty.js";
import { changes } from "../../transient/course-line.js";

/**
 * A duty under the name that a steady figure of it needs: of one that changes in time, that the figure is of before.
 * @param figure as the duty writes it under `report`
 */
export function steadyTitle(duty: Duty, figure: string): string {
  const inTime = duty.report.find((r) => r.text === figure)?.what === "time-beyond";
  return changes(duty) && !inTime ? `${duty.title}, before its change` : duty.title;
}
