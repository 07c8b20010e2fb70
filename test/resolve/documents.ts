import type { Chemistry } from "../../src/model/chemistry.js";
import type { Duty } from "../../src/model/duty.js";
import type { Problem } from "../../src/problems/problem.js";
import { collector } from "../../src/problems/report.js";
import { readYaml } from "../../src/read/yaml.js";
import { resolveChemistry } from "../../src/resolve/chemistry.js";
import { resolveDuty } from "../../src/resolve/duty.js";

export interface Read<T> {
  readonly found: T | undefined;
  readonly problems: readonly Problem[];
  /** "code at `text`" of each problem. */
  readonly told: readonly string[];
}

const told = (problems: readonly Problem[]): string[] =>
  problems.map(({ code, at }) => `${code} at ${at.source.text.slice(at.from, at.to)}`);

export function readChemistry(text: string): Read<Chemistry> {
  const { report, problems } = collector();
  const tree = readYaml({ path: "chemistry.yaml", text }, report);
  const found = tree && resolveChemistry(tree, "chemistry.yaml", report);
  return { found, problems, told: told(problems) };
}

export function readDuty(text: string, chemistry?: Chemistry): Read<Duty> {
  const { report, problems } = collector();
  const tree = readYaml({ path: "duty.yaml", text }, report);
  const found =
    tree &&
    resolveDuty(
      tree,
      "duty.yaml",
      { chemistry: () => chemistry, tables: { read: () => undefined, root: undefined } },
      report,
    );
  return { found, problems, told: told(problems) };
}

/** A chemistry with species A, B, P, X, the constants and reactions given as YAML lines. */
export const chemistry = (constants: string, ...reactions: string[]): string =>
  `chemistry: test\nformat: 1\nspecies: {A: {}, B: {}, P: {}}\nconstants: ${constants}\nreactions:\n${reactions.map((r) => `  - ${r}\n`).join("")}`;
