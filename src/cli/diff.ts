import { compile } from "../compile/compile.js";
import type { Difference } from "../diff/difference.js";
import { diffDocuments } from "../diff/document.js";
import { type Figure, figuresOf, type Shown } from "../diff/figures.js";
import { diffNetworks } from "../diff/network.js";
import { parseAny } from "../parse/any.js";
import type { NetworkDocument } from "../parse/network.js";
import { filesOf } from "../parse/parsed.js";
import { collector, hasErrors } from "../problems/report.js";
import type { MapNode } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { wholeDocument } from "../resolve/based-on.js";
import type { DocumentKind } from "../schema/shape.js";
import { documents } from "../schema/validators.js";
import type { Context } from "./context.js";
import { type QuantityJson, quantity } from "./json/quantity.js";
import { InputError, type Outcome } from "./outcome.js";
import { diffText } from "./text/diff.js";

/** `diff A B`: what changed in meaning between two documents of a kind. */
export function diff(before: string, after: string, context: Context): Outcome {
  const [a, b] = [before, after].map((file) => open(file, context));
  if (a.kind !== b.kind) {
    const { report, problems } = collector();
    report("wrong-document", b.tree.entries[0].key.at, { found: b.kind, wanted: a.kind });
    throw new InputError(problems);
  }
  const { differences, figures } =
    a.network && b.network
      ? ofNetworks(a.network, b.network)
      : { differences: diffDocuments(a.tree, b.tree, documents[a.kind].shape), figures: [] };
  return {
    status: 0,
    text: diffText(before, after, differences, figures),
    json: {
      ok: true,
      kind: a.kind,
      same: differences.length === 0,
      differences,
      figures: figures.map((f) => ({ ...f, before: shownJson(f.before), after: shownJson(f.after) })),
    },
  };
}

const shownJson = (shown: Shown | undefined): QuantityJson | null => (shown ? quantity(shown.value, shown.unit) : null);

interface Opened {
  readonly kind: DocumentKind;
  /** Of a variant: the base with the change laid over it. */
  readonly tree: MapNode;
  /** A whole network, not a change to one. */
  readonly network: NetworkDocument | undefined;
}

function open(file: string, { inputs }: Context): Opened {
  const text = inputs.text(file);
  if (typeof text !== "string") throw new InputError([text]);
  const { kind, network, problems } = parseAny(text, inputs.options(file));
  const tree = readYaml({ path: file, text }, collector().report);
  if (!kind || !tree || hasErrors(problems)) throw new InputError(problems);
  inputs.accept(problems);
  const is = kind === "change" ? "network" : kind;
  const files = filesOf(file, inputs.options(file));
  return { kind: is, tree: wholeDocument(tree, is, files, collector().report) ?? tree, network };
}

function ofNetworks(a: NetworkDocument, b: NetworkDocument): { differences: readonly Difference[]; figures: Figure[] } {
  const { differences, matching } = diffNetworks(a, b);
  const [before, after] = [compile(a).plant, compile(b).plant];
  return { differences, figures: before && after ? figuresOf(before, after, matching) : [] };
}
