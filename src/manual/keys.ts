import type { DocumentKind, KeyShape, RecordShape, Shape } from "../schema/shape.js";
import { anchor, code, parts } from "./markdown.js";
import { notYet, takes } from "./takes.js";

type Keys = Readonly<Record<string, KeyShape>>;

/** Where keys stand: `feeds`, `NAME` is the map of any one feed. */
export type Path = readonly string[];

/** A group of keys that stand together in one map. */
export interface Group {
  readonly path: Path;
  /** What the map is, where that needs a word of its own. */
  readonly says: string | undefined;
  readonly keys: Keys;
  readonly oneOf: readonly string[] | undefined;
  /** Where the same keys were told before. */
  readonly sameAs: Path | undefined;
}

/** Every map of a document that has keys of the language, outer ones first; one that recurs refers to where it was told. */
export function groupsOf(kind: DocumentKind, shape: Shape): Group[] {
  const groups: Group[] = [];
  const told = new Map<string, Path>();
  const ofRecord = (path: Path, { keys, oneOf }: RecordShape, says?: string): void => {
    const mark = JSON.stringify(keys);
    const sameAs = told.get(mark);
    if (sameAs?.join() === path.join()) return; // one of them, or a list of them
    groups.push({ path, says, keys, oneOf, sameAs });
    if (sameAs) return;
    told.set(mark, path);
    for (const [name, { shape, later }] of Object.entries(keys)) if (!later) visit([...path, name], shape);
  };
  const visit = (path: Path, at: Shape): void => {
    if (at.is === "record") ofRecord(path, at);
    else if (at.is === "list") visit(path, at.of);
    else if (at.is === "either") for (const one of at.of) visit(path, one);
    else if (at.is === "named") {
      if (at.later) groups.push({ ...group(path), keys: refused(at.later) });
      visit([...path, "NAME"], at.each);
    } else if (at.is === "variant") {
      for (const [name, { says, keys, later }] of Object.entries(at.of)) {
        const { [at.by]: _, ...others } = keys;
        const here = [...path, `${at.by}: ${name}`];
        if (later) groups.push({ ...group(here), says: `${says} (${notYet})` });
        else ofRecord(here, { is: "record", keys: others }, says);
      }
    } else if (at.is === "depends") {
      // The other form is a part of this one again: only its own keys are told.
      ofRecord(path, at.absent);
      const says = `A ${kind} that is only a change has no keys but these.`;
      groups.push({ ...group([...path, at.on]), says, keys: at.present.keys });
    }
  };
  visit([], shape);
  return groups;
}

const group = (path: Path): Group => ({ path, says: undefined, keys: {}, oneOf: undefined, sameAs: undefined });

const refused = (later: Readonly<Record<string, string>>): Keys =>
  Object.fromEntries(
    Object.entries(later).map(([key, says]): [string, KeyShape] => [key, { shape: { is: "text" }, says, later: true }]),
  );

/** All keys of a document, under a heading for each map. */
export function keysSection(kind: DocumentKind, shape: Shape): string {
  return parts(...groupsOf(kind, shape).map((group) => groupText(kind, group)));
}

function groupText(kind: DocumentKind, { path, says, keys, oneOf, sameAs }: Group): string {
  const heading = (of: Path): string => [kind, ...of].join(" › ");
  const list = Object.entries(keys).flatMap(([name, key]) => (key.elsewhere ? [] : keyText(name, key)));
  return parts(
    path.length > 0 ? `#### ${heading(path)}` : "",
    says ?? "",
    oneOf ? `Exactly one of ${oneOf.map(code).join(", ")} must be there.` : "",
    sameAs ? `The same keys as at [${heading(sameAs)}](#${anchor(heading(sameAs))}).` : list.join("\n"),
  );
}

/** A key: what it takes, whether it must be there, what it says, an example. */
function keyText(name: string, key: KeyShape): string {
  if (key.later) return `- **${code(name)}** · *${notYet}*  \n  ${key.says}`;
  const facts = [takes(key.shape)];
  if (key.required) facts.push("**required**");
  if (key.needs !== undefined) facts.push(`with ${code(key.needs)}`);
  if (key.default !== undefined) facts.push(`without it ${code(key.default)}`);
  const example = key.example === undefined ? "" : `  \n  ${code(`${name}: ${key.example}`)}`;
  return `- **${code(name)}** · ${facts.join(" · ")}  \n  ${key.says}${example}`;
}
