import type { Driver, Spread } from "../../study/spread-shares.js";
import { chance } from "../digits.js";

/** What people call an uncertain input. */
export function driverName({ kind, name, vessel, duty }: Driver): string {
  const [place, what] = [name.slice(0, name.lastIndexOf(".")), name.slice(name.lastIndexOf(".") + 1)];
  switch (kind) {
    case "fit":
      if (vessel.length + duty.length === 1) return `${name} (fitted)`;
      return duty.length === 0 ? "the tracer fit" : vessel.length === 0 ? "the fitted kinetics" : "the fit";
    case "flow":
      return `flow of ${place}`;
    case "feed":
      return place === "" ? name : `${what} in ${place}`;
    default:
      return name;
  }
}

/** How to learn more of it. */
function remedy({ kind, name, vessel, duty }: Driver): string {
  switch (kind) {
    case "fit":
      return `${duty.length === 0 ? "a longer or another tracer test" : "another test"} that pins ${[...vessel, ...duty].join(", ")} narrows it most`;
    case "kinetics":
      return `measure ${name} before the vessel is changed`;
    case "flow":
      return "check the flow meter first";
    case "feed":
      return "analyse the feed more often first";
    case "temperature":
      return "check the thermometer first";
    default:
      return `find out ${name} more exactly first`;
  }
}

/** Below this no input stands out. */
const standsOut = 0.3;

/** "k2 holds 71 % of what is unsure: measure k2 before the vessel is changed"; undefined where nothing is unsure. */
export function spreadWords(spread: Spread | undefined): string | undefined {
  const first = spread?.drivers[0];
  if (!spread || !first) return undefined;
  const share = (d: Driver): string => chance(Math.min(1, d.share));
  if (first.share < standsOut) {
    const few = spread.drivers.slice(0, 3).map((d) => `${driverName(d)} ${share(d)}`);
    return `no single input holds most of what is unsure (${few.join(", ")})`;
  }
  return `${driverName(first)} holds ${share(first)} of what is unsure: ${remedy(first)}`;
}

/** How the shares were found, for the caption of their picture. */
export function methodWords({ method, explained, sd, linearSd }: Spread): string {
  const by =
    method === "regression"
      ? `shares by regression on the draws, which explains ${chance(explained ?? 0)} of the variance`
      : "shares by drawing each input anew by itself (pick-freeze); what is missing to 100\u2009% is held jointly";
  const ratio = linearSd === undefined || !Number.isFinite(linearSd) ? undefined : linearSd / sd;
  const check =
    ratio === undefined
      ? ""
      : ratio > 0.85 && ratio < 1.15
        ? "; error propagation by slopes alone agrees"
        : `; error propagation by slopes alone would give ${ratio.toFixed(2)} times this spread`;
  return by + check;
}
