import { spawn } from "node:child_process";
import { readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { noises, vessels } from "./cases.js";
import { type Outcome, pageOf } from "./page.js";

/** Sets that one process looks at. */
const chunk = 50;

/** Counts on two processes how often intervals hold the truth over so many sets of each vessel and noise, and writes the page. */
export async function coverage(root: string, work: string, sets: number): Promise<void> {
  const all = vessels((path) => readFileSync(join(root, path), "utf8"));
  const jobs = all.flatMap(({ refits, errors }, v) =>
    errors.flatMap((n) =>
      Array.from({ length: Math.ceil(sets / chunk) }, (_, k) => [
        v,
        n,
        k * chunk,
        Math.min(chunk, sets - k * chunk),
        refits,
      ]),
    ),
  );
  const outcomes: Outcome[] = [];
  const next = async (): Promise<void> => {
    for (let job = jobs.shift(); job; job = jobs.shift()) {
      outcomes.push(await run(join(work, "coverage.mjs"), job, root));
      console.log(`  ${all[job[0]].title}, ${noises[job[1]].title}: sets ${job[2] + 1} to ${job[2] + job[3]}`);
    }
  };
  await Promise.all([next(), next()]);
  const page = pageOf(outcomes, all);
  writeFileSync(join(root, "shared/reference/measured/coverage.md"), page);
  console.log(`\n${page}\nwritten: shared/reference/measured/coverage.md (the build puts it into the manual)`);
}

function run(program: string, job: readonly number[], root: string): Promise<Outcome> {
  return new Promise((done, fail) => {
    const child = spawn(process.execPath, [program, ...job.map(String)], {
      env: { ...process.env, BACKMIX_ROOT: root },
    });
    let out = "";
    child.stdout.on("data", (part) => {
      out += part;
    });
    child.on("close", (status) =>
      status === 0 ? done(JSON.parse(out) as Outcome) : fail(new Error(`coverage: ${job.join(" ")}`)),
    );
  });
}
