import { formatNumber } from "../../units/format.js";
import { atDecimals, chance } from "../digits.js";
import { figure, type Html, list, paragraph, section, table } from "../html.js";
import type { StudyReport } from "../input.js";

/** Which networks were tried, how they rank, and which cannot be told apart. */
export function rivalsSection({ rivals, equals, nested, rivalCurves }: StudyReport): Html {
  const best = Math.min(...rivals.map((r) => r.aicc));
  const rows = rivals.map((r) => [
    r.short === undefined ? r.network : { words: r.network, under: `in figures: ${r.short}` },
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
    ...rivalCurves.map(figure),
  ]);
}
