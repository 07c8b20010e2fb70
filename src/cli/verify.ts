import { compile } from "../compile/compile.js";
import type { UnitBook } from "../model/network.js";
import { parseAny } from "../parse/any.js";
import { problemJson } from "../problems/json.js";
import type { Obstacle } from "../problems/obstacle.js";
import type { Problem } from "../problems/problem.js";
import { hasErrors, problem } from "../problems/report.js";
import { type CheckResult, runChecks } from "../simulate/checks.js";
import { placeOf } from "../text/source.js";
import { inUnit } from "../units/unit.js";
import type { Context } from "./context.js";
import type { Io } from "./io.js";
import { quantity } from "./json/quantity.js";
import { type Outcome, UsageError } from "./outcome.js";
import { junit } from "./text/junit.js";
import { verifyText } from "./text/verify.js";
import type { Statement, Verified } from "./verified.js";

export interface VerifyOptions {
  readonly format: "text" | "json" | "junit";
}

/** `verify DIR`: every YAML document under a folder is sound, and every statement of every network holds. */
export function verify(folder: string, { format }: VerifyOptions, { inputs, io }: Context): Outcome {
  const { files, skipped, lost } = documentsUnder(folder, io);
  const verified = files.map((file): Verified => {
    const why = lost.get(file);
    if (why) return { file, kind: undefined, problems: [unreadable(file, why)], statements: [] };
    const text = inputs.text(file);
    if (typeof text !== "string") return { file, kind: undefined, problems: [text], statements: [] };
    const { kind, network, problems } = parseAny(text, inputs.options(file));
    const plant = network && compile(network).plant;
    const statements = plant ? runChecks(plant).map((r) => statement(r, plant.network.units)) : [];
    return { file, kind, problems, statements };
  });
  const ok = verified.every(holds);
  return {
    status: ok ? 0 : 1,
    text: format === "junit" ? junit(folder, verified) : verifyText(folder, verified, skipped, io.colour.out),
    json: {
      ok,
      files: verified.map((v) => ({
        file: v.file,
        ok: holds(v),
        kind: v.kind ?? null,
        problems: v.problems.map(problemJson),
        checks: v.statements.map((s) => ({
          name: s.name,
          holds: s.holds,
          value: quantity(s.value, s.unit),
          equals: quantity(s.equals, s.unit),
          within: s.within,
          line: s.line,
        })),
      })),
      skipped,
      problems: verified.flatMap((v): readonly Problem[] => v.problems).map(problemJson),
    },
  };
}

const holds = ({ problems, statements }: Verified): boolean => !hasErrors(problems) && statements.every((s) => s.holds);

function statement({ check, value, equals, holds }: CheckResult, units: UnitBook): Statement {
  const unit = check.equals.unit ?? units.unitFor(check.equals.dimension);
  const written = check.equals.at.source.text.slice(check.equals.at.from, check.equals.at.to);
  const name = `${check.what} ${check.of} equals ${written}`;
  const off = equals === 0 ? Number.NaN : inUnit(value, unit) / inUnit(equals, unit) - 1;
  return { name, value, equals, unit, within: check.within, off, holds, line: placeOf(check.at).line };
}

/** What is not there for reading has no line to show. */
const unreadable = (file: string, why: Obstacle): Problem =>
  problem("file-unreadable", { source: { path: file, text: "" }, from: 0, to: 0 }, { file, why });

/** A folder as it is walked. */
interface Walk {
  /** Every YAML document, and all that should be one, or lead to some, and cannot be read. */
  readonly files: string[];
  /** What is not looked into on purpose. */
  readonly skipped: string[];
  readonly lost: Map<string, Obstacle>;
}

/** Every YAML file below a folder, in order. */
function documentsUnder(folder: string, io: Io): Walk {
  const walk: Walk = { files: [], skipped: [], lost: new Map() };
  const lose = (path: string, why: Obstacle): void => {
    walk.files.push(path);
    walk.lost.set(path, why);
  };
  const look = (path: string): void => {
    const entries = io.list(path);
    if (!entries) {
      lose(path, "denied");
      return;
    }
    for (const { name, is } of [...entries].sort((a, b) => (a.name < b.name ? -1 : 1))) {
      const inside = path === "." ? name : `${path.replace(/[/\\]+$/, "")}/${name}`;
      if (is === "folder" && (name === "node_modules" || name.startsWith("."))) walk.skipped.push(inside);
      else if (is === "folder") look(inside);
      else if (is === "lost") lose(inside, io.obstacle(inside) ?? "dangling");
      else if (!/\.ya?ml$/i.test(name)) continue;
      else if (is === "file") walk.files.push(inside);
      else lose(inside, io.obstacle(inside) ?? "other");
    }
  };
  if (io.list(folder) === undefined) throw new UsageError(`'${folder}' is no folder that can be read`);
  look(folder);
  if (walk.files.length === 0) throw new UsageError(`there is no YAML file under '${folder}'`);
  return walk;
}
