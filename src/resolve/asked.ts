import type { Duty } from "../model/duty.js";
import type { AimAsked, Asked, ChangeDocument, InputRange, SweepAsked } from "../model/study.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { beside } from "../read/paths.js";
import { child, entriesOf, itemsOf, type ScalarNode, type Tree, textOf } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { resolveAim } from "./aim.js";
import { emptyScope, resolveValue } from "./value.js";

/** What a study lists, by the paths of the files: of one that could not be read only the path is there. */
export interface Listed {
  readonly duties: ReadonlyMap<string, Duty | undefined>;
  readonly changes: ReadonlyMap<string, ChangeDocument | undefined>;
}

const usualPoints = 11;

/** `sweeps:` of a study; one that has an error is left out once it is reported. */
export function resolveSweeps(node: Tree | undefined, listed: Listed, report: Report): SweepAsked[] {
  return itemsOf(node).flatMap((item): SweepAsked[] => {
    const asked = askedOf(item, listed, report);
    const written = entriesOf(child(item, "over"));
    const ranges = written.map(({ key, value }) => rangeOf(key.text, key.at, value, report));
    if (written.length === 0 || written.length > 2) {
      report("sweep-inputs", child(item, "over")?.at ?? item.at, { count: written.length });
      return [];
    }
    const over = ranges.filter((r) => r !== undefined);
    return asked && over.length === ranges.length ? [{ ...asked, over }] : [];
  });
}

/** `aims:` of a study. */
export function resolveAims(node: Tree | undefined, listed: Listed, report: Report): AimAsked[] {
  return itemsOf(node).flatMap((item): AimAsked[] => {
    const asked = askedOf(item, listed, report);
    const aimNode = child(item, "aim");
    const by = child(item, "by");
    const range = by?.type === "scalar" ? rangeOf(by.text, by.at, item, report) : undefined;
    const confidence = confidenceOf(child(item, "confidence"), report);
    const aim = asked && aimNode?.type === "scalar" ? resolveAim(aimNode, asked.duty, report) : undefined;
    if (!asked || !aim || !range || confidence === "wrong") return [];
    return [{ ...asked, aim, by: range, confidence }];
  });
}

/** The duty and the change that an entry is about. */
function askedOf(item: Tree, { duties, changes }: Listed, report: Report): Asked | undefined {
  const find = <T>(key: string, list: ReadonlyMap<string, T | undefined>): T | "none" | undefined => {
    const node = child(item, key);
    if (node?.type !== "scalar") return "none";
    const file = beside(node.at.source.path, node.text);
    if (list.has(file)) return list.get(file);
    const known = [...list.keys()];
    const wanted = key === "duty" ? "file under `duties`" : "file under `changes`";
    report("unknown-place", node.at, { name: node.text, nearest: nearest(node.text, known), wanted, known });
    return undefined;
  };
  const duty = find("duty", duties);
  const change = find("change", changes);
  if (duty === undefined || duty === "none" || change === undefined) return undefined;
  return { at: item.at, duty, change: change === "none" ? undefined : change };
}

function rangeOf(name: string, at: Span, node: Tree, report: Report): InputRange | undefined {
  const written = child(node, "between");
  const ends = itemsOf(written).map((end) => resolveValue(end, "any", emptyScope, report));
  if (ends.some((e) => e === undefined)) return undefined;
  const [low, high] = ends as Value[];
  if (low && high && !(low.of([]) < high.of([]))) {
    report("range-ends", written?.at ?? at, { name });
    return undefined;
  }
  const spacing = textOf(node, "spacing");
  if (spacing === "log" && low && !(low.of([]) > 0)) {
    report("range-log", low.at, { name });
    return undefined;
  }
  return {
    name,
    at,
    between: low && high ? [low, high] : undefined,
    points: Number(textOf(node, "points") ?? usualPoints),
    log: spacing === undefined ? undefined : spacing === "log",
  };
}

function confidenceOf(node: Tree | undefined, report: Report): number | undefined | "wrong" {
  if (!node) return undefined;
  const value = resolveValue(node, dimensions.ratio, emptyScope, report);
  if (!value) return "wrong";
  const share = value.of([]);
  if (share >= 0.5 && share < 1) return share;
  report("bad-confidence", node.at, { text: (node as ScalarNode).text });
  return "wrong";
}
