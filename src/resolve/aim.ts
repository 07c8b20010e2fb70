import type { Aim } from "../model/aim.js";
import type { Duty, Reported } from "../model/duty.js";
import type { Report } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { one } from "../units/unit.js";
import { settleLimit } from "./feed-basis.js";
import { resolveReportLine } from "./report-line.js";
import { part } from "./requirements.js";
import { emptyScope, resolveValue } from "./value.js";

const form = /^(.*?\S)\s*(>=|<=|≥|≤|=|>|<)\s*(.*)$/s;

const signs: Readonly<Record<string, Aim["sign"]>> = {
  ">=": ">=",
  "≥": ">=",
  ">": ">=",
  "<=": "<=",
  "≤": "<=",
  "<": "<=",
  "=": "=",
};

/** Reads `conversion of A >= 95 %`: a report line, a sign, a value. Undefined once its problem is reported. */
export function resolveAim(node: ScalarNode, duty: Duty, report: Report): Aim | undefined {
  const found = form.exec(node.text);
  if (!found) {
    report("bad-aim", node.at, { text: node.text });
    return undefined;
  }
  const [, figure, sign, value] = found;
  const species = speciesOf(duty);
  const asked = resolveReportLine(part(node, 0, figure), species, report);
  const line = asked && settleLimit(asked, duty.chemistry, species, duty, report);
  if (!line) return undefined;
  const target = part(node, node.text.length - value.length, value);
  const known = resolveValue(target, dimensionOf(line, duty), emptyScope, report);
  if (!known) return undefined;
  const share = known.of([]);
  if (line.what === "conversion" && !(share <= 1)) {
    const meant =
      share <= 100
        ? `write the sign: \`${figure} ${sign} ${Number(share.toPrecision(6))} %\``
        : "ask for 100 % at most";
    report("aim-beyond", target.at, { figure, target: `${Number((100 * share).toPrecision(6))} %`, meant });
    return undefined;
  }
  const text = node.text.trim().replace(/\s+/g, " ");
  return { text, line, sign: signs[sign], target: { value: known.of([]), unit: known.unit ?? one } };
}

/** Species of the chemistry, or of what is fed where nothing reacts. */
export const speciesOf = (duty: Duty): string[] =>
  duty.chemistry
    ? duty.chemistry.species.map((s) => s.name)
    : [...new Set([...duty.feeds.values()].flatMap((f) => [...f.species.keys()]))];

function dimensionOf({ what, of }: Reported, duty: Duty): Dimension {
  if (what === "tracer-time" || what === "time-beyond") return dimensions.time;
  if (what === "temperature") return dimensions.temperature;
  if (what !== "concentration") return dimensions.ratio;
  return duty.concentrations[speciesOf(duty).indexOf(of)] ?? dimensions["molar concentration"];
}
