import { formatNumber } from "../../units/format.js";
import { atDecimals, chance } from "../digits.js";
import { type Cell, figures, type Html, list, paragraph, section, table } from "../html.js";
import type { Rival, StudyReport } from "../input.js";

/** Which networks were tried, how they rank, and which cannot be told apart. */
export function rivalsSection({ rivals, equals, nested, rivalCurves }: StudyReport): Html {
  const best = Math.min(...rivals.map((r) => r.aicc));
  const rows = rivals.map((r) => [
    rivalCell(r),
    String(r.freeParameters),
    r.aicc - best < 100 ? atDecimals(r.aicc - best, 1) : formatNumber(r.aicc - best),
    chance(r.weight),
    r.verdict,
  ]);
  const columns = [
    { head: "network" },
    { head: "free parameters", number: true },
    { head: "AICc above the best", number: true },
    { head: "weight", number: true },
    { head: "why" },
  ];
  const told = equals.length > 0 ? [paragraph("These data cannot tell apart:"), list(equals)] : [];
  return section("rivals", "Rival networks", [
    table("Ranked by the small-sample Akaike criterion", columns, rows),
    ...told,
    ...(nested && nested.length > 0 ? [paragraph("Special cases of others:"), list(nested)] : []),
    figures(rivalCurves),
  ]);
}

/** Its letter in the figures, its title; below, its file. */
function rivalCell({ letter, network, file }: Rival): Cell {
  const words = letter === undefined ? network : `${letter}\u2002${network}`;
  return file === undefined ? words : { words, under: file };
}
