import type { Reported } from "../model/duty.js";
import type { Report } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import { dimensions } from "../units/dimension.js";
import { concentrationBases } from "./bases.js";
import { aboveZero } from "./sign.js";
import { spanWithin } from "./span.js";
import { emptyScope, resolveValue } from "./value.js";

const name = "([A-Za-z][A-Za-z0-9_-]*)";
const place = "(?: at ([A-Za-z][A-Za-z0-9_.-]*))?";

/** The forms of a report line, each with the places of its parts in the match. */
const forms: readonly { form: RegExp; what: Reported["what"]; versus: boolean }[] = [
  { form: new RegExp(`^conversion of ${name}${place}$`), what: "conversion", versus: false },
  { form: new RegExp(`^log-removal of ${name}${place}$`), what: "log-removal", versus: false },
  { form: new RegExp(`^yield of ${name} from ${name}${place}$`), what: "yield", versus: true },
  { form: new RegExp(`^selectivity of ${name} over ${name}${place}$`), what: "selectivity", versus: true },
];
const ofTracer = /^t(\d{1,2}) at ([A-Za-z][A-Za-z0-9_.-]*)$/;
const ofSpecies = new RegExp(`^${name} at ([A-Za-z][A-Za-z0-9_.-]*)$`);
const ofHeat = /^temperature at ([A-Za-z][A-Za-z0-9_.-]*)$/;
const ofTime = new RegExp(`^time ${name} at ([A-Za-z][A-Za-z0-9_.-]*) (above|below) (\\S.*)$`);

/** Reads one line of `report:`. Undefined once its problem is reported. */
export function resolveReportLine(node: ScalarNode, species: readonly string[], report: Report): Reported | undefined {
  const text = node.text.trim().replace(/\s+/g, " ");
  const line = { text, place: node.at, of: "", versus: undefined, percent: undefined, at: undefined };
  const known = (asked: string | undefined): boolean => {
    if (asked === undefined || species.includes(asked)) return true;
    report("unknown-place", node.at, {
      name: asked,
      nearest: nearest(asked, species),
      wanted: "species",
      known: species,
    });
    return false;
  };
  const beyond = ofTime.exec(text);
  if (beyond) {
    const [, of, at, side, written] = beyond;
    const from = node.text.lastIndexOf(written);
    const place = from < 0 ? node.at : spanWithin(node, from, from + written.length);
    const warm = of === "temperature" && !species.includes(of);
    const bases = warm ? [dimensions.temperature] : concentrationBases;
    const value = resolveValue({ ...node, text: written, at: place }, bases, emptyScope, report);
    if ((!warm && !known(of)) || !value || !aboveZero("a limit", value, true, report)) return undefined;
    return {
      ...line,
      what: "time-beyond",
      of: warm ? "" : of,
      at,
      limit: { side: side === "above" ? "above" : "below", value },
    };
  }
  for (const { form, what, versus } of forms) {
    const match = form.exec(text);
    if (!match) continue;
    const [, of, second] = match;
    const found = { ...line, what, of, versus: versus ? second : undefined, at: match[versus ? 3 : 2] };
    return known(of) && known(found.versus) ? found : undefined;
  }
  const warm = ofHeat.exec(text);
  if (warm) return { ...line, what: "temperature", at: warm[1] };
  const single = ofSpecies.exec(text);
  const tracer = ofTracer.exec(text);
  if (tracer && !species.includes(`t${tracer[1]}`) && Number(tracer[1]) > 0)
    return { ...line, what: "tracer-time", percent: Number(tracer[1]), at: tracer[2] };
  if (single) return known(single[1]) ? { ...line, what: "concentration", of: single[1], at: single[2] } : undefined;
  report("bad-report-line", node.at, { text });
  return undefined;
}
