import type { Fit } from "../fit/result.js";
import type { NetworkDocument } from "../parse/network.js";
import type { Problem } from "../problems/problem.js";
import { decodeText } from "../read/decode.js";
import { type Rewritten, writeBack } from "../tidy/write-back.js";
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

/** Puts fitted values back into the file of the network: all of them or none, and none of a fit that did not end well. */
export function writeFit(file: string, network: NetworkDocument, fit: Fit, status: ExitStatus, io: Io): Writing {
  const refuse = (why: string, problems: readonly Problem[] = []): Writing => {
    return {
      failed: true,
      written: null,
      text: undefined,
      problems,
      notes: [`backmix: ${file} is left as it was: ${why}`],
    };
  };
  if (status !== 0) return refuse("the fit did not end well");
  const now = io.read(file);
  if (now === undefined || decodeText(now) !== network.at.source.text) return refuse("it changed while the fit ran");
  const { text, rewritten, problems } = writeBack(
    network,
    fit.parameters.filter((p) => !p.ofTrial),
  );
  if (text === undefined) return refuse("a value cannot be put back", problems);
  io.write(file, text);
  const lines = rewritten.map((r) => `  ${r.name}: ${r.before} -> ${r.after}`);
  const left = [...new Set(fit.parameters.flatMap((p) => p.ofTrial?.name ?? []))].map(
    (name) =>
      `  ${name}: left as it is, since each trial has a value of its own; write in a duty's \`with:\` which one it takes`,
  );
  const said = [`written to ${file}`, ...lines, ...left].join("\n");
  return { failed: false, written: rewritten, text: said, problems, notes: [] };
}
