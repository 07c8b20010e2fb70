import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";

/**
 * True where a value carries no `±`, or is not there; reports a `±` that no interval would carry.
 * @param named  may a name of the network stand there, whose `±` is carried?
 */
export function certain(what: string, value: Value | undefined, report: Report, named = false): boolean {
  if (!value?.sd) return true;
  report("spread-not-carried", value.at, { what, named });
  return false;
}
