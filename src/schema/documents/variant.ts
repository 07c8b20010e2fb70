import { partial } from "../partial.js";
import type { KeyShape, RecordShape, Shape } from "../shape.js";
import { record, text } from "./common.js";

/**
 * A document whole, or as a change to another one (`based-on: FILE` with `change:`).
 * @param alone may a change stand without a base? A study applies such a one to each of its rivals
 */
export function orVariant(kind: string, whole: RecordShape, alone = false): Shape {
  const { [kind]: title, format, notes, ...rest } = whole.keys;
  const basedOn: KeyShape = {
    shape: text,
    says: `The ${kind} file that this one is a variant of, relative to this file. It may be a variant itself. What is different stands under \`change\`; the title is this file's own, and so are the notes where it has any.`,
    example: `base.yaml`,
  };
  const change: KeyShape = {
    shape: partial(record(rest)),
    says: `What is different: merged into the ${kind} key by key. \`null\` removes; lists and \`to\` are replaced whole; a changed \`kind\` replaces the compartment.${
      alone ? " Without `based-on` it is a change that a study applies to each rival, with its fitted values." : ""
    }`,
    required: true,
    example: exampleOf[kind] ?? "{}",
  };
  return {
    is: "depends",
    on: "change",
    present: record({ [kind]: title, format, notes, "based-on": { ...basedOn, required: !alone }, change }),
    absent: record({ ...whole.keys, "based-on": { ...basedOn, needs: "change" } }, whole.oneOf),
  };
}

const exampleOf: Readonly<Record<string, string>> = {
  network: "{parameters: {bypass: {value: 2 %}}}",
  trial: "{flows: {feed: 5 L/min}}",
  chemistry: "{constants: {k1: 0.3 1/min}}",
  duty: "{temperature: 40 degC}",
  study: "{seed: 8}",
};
