import { chemistriesOf, withKinetics } from "../fit/kinetics.js";
import type { Fit, FittedParameter } from "../fit/result.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { NetworkDocument } from "../parse/network.js";
import { readDocument } from "../parse/parsed.js";
import type { Problem } from "../problems/problem.js";
import { decodeText } from "../read/decode.js";
import { type NewValue, type Rewritten, type Written, writeBack } from "../tidy/write-back.js";
import type { ExitStatus, Io } from "./io.js";

/** What `fit --write` came to. */
export interface Writing {
  readonly failed: boolean;
  /** Each value with its text before and after; null where nothing was written. */
  readonly written: readonly Rewritten[] | null;
  readonly text: string | undefined;
  readonly problems: readonly Problem[];
  readonly notes: readonly string[];
}

/** A file that holds parameters, and the values that belong there. */
interface Target {
  readonly file: string;
  readonly text: string;
  readonly document: Written;
  readonly values: readonly NewValue[];
}

/**
 * Puts fitted values back into the file of the network and those of the chemistries: all of them or none, and none of a fit that
 * did not end well.
 */
export function writeFit(
  file: string,
  network: NetworkDocument,
  trials: readonly Trial[],
  fit: Fit,
  status: ExitStatus,
  io: Io,
): Writing {
  const refuse = (why: string, of = file, problems: readonly Problem[] = []): Writing => {
    const notes = [`backmix: ${of} is left as it was: ${why}`];
    return { failed: true, written: null, text: undefined, problems, notes };
  };
  if (status !== 0) return refuse("the fit did not end well");
  const whole = withKinetics(network, trials);
  const isKinetic = (p: FittedParameter): boolean => whole.names.some((n) => n.name === p.name && n.chemistry);
  const own = fit.parameters.filter((p) => !isKinetic(p) && !p.ofTrial);
  const targets: Target[] = [
    ...(own.length > 0 || fit.parameters.every((p) => !isKinetic(p))
      ? [{ file, text: network.at.source.text, document: network, values: own }]
      : []),
    ...chemistriesOf(trials).flatMap((c) => targetOf(c, whole, fit)),
  ];
  const changed = targets.find((t) => {
    const now = io.read(t.file);
    return now === undefined || decodeText(now) !== t.text;
  });
  if (changed) return refuse("it changed while the fit ran", changed.file);
  const made = targets.map((t) => ({ ...t, ...writeBack(t.document, t.values) }));
  const failed = made.find((m) => m.text === undefined);
  if (failed) return refuse("a value cannot be put back", failed.file, failed.problems);
  const lines = made.flatMap(({ file: into, text, rewritten }) => {
    io.write(into, text ?? "");
    return [`written to ${into}`, ...rewritten.map((r) => `  ${r.name}: ${r.before} -> ${r.after}`)];
  });
  return {
    failed: false,
    written: made.flatMap((m) => m.rewritten),
    text: [...lines, ...leftOf(fit)].join("\n"),
    problems: made.flatMap((m) => m.problems),
    notes: [],
  };
}

/** Parameters that each trial has a value of its own of. */
const leftOf = ({ parameters }: Fit): string[] =>
  [...new Set(parameters.flatMap((p) => p.ofTrial?.name ?? []))].map(
    (name) =>
      `  ${name}: left as it is, since each trial has a value of its own; write in a duty's \`with:\` which one it takes`,
  );

/** The file of a chemistry with the values that were fitted of its parameters; nothing where there are none. */
function targetOf(chemistry: Chemistry, whole: Network, fit: Fit): Target[] {
  const names = whole.names.flatMap((n) =>
    n.chemistry?.path === chemistry.path ? [{ fitted: n.name, named: { ...n, name: n.chemistry.name } }] : [],
  );
  const values = fit.parameters.flatMap((p) => {
    const of = names.find((n) => n.fitted === p.name);
    return of ? [{ name: of.named.name, value: p.value, standardError: p.standardError }] : [];
  });
  const { text, path } = chemistry.at.source;
  const { tree } = readDocument(text, path);
  if (values.length === 0 || !tree) return [];
  const { units } = whole;
  const document = {
    at: chemistry.at,
    names: names.map((n) => n.named),
    order: names.map((n) => n.named.slot),
    units,
    tree,
  };
  return [{ file: chemistry.path, text, document, values }];
}
