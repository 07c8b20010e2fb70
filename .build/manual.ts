import { existsSync, readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { manual } from "../src/manual/manual.js";

const shipped = {
  network: "networks/demo/both.yaml",
  trial: "networks/demo/salt-half.yaml",
  chemistry: "shared/chemistry/second-order-hydrolysis.yaml",
  duty: "networks/demo/normal.yaml",
  study: "networks/demo/study.yaml",
};

/** The reference manual of a clone: the declarations with the shipped documents and the broken ones of the tests. */
export function manualOf(root: string): string {
  const read = (path: string): string => readFileSync(join(root, path), "utf8");
  const folder = "test/broken";
  const broken = readdirSync(join(root, folder))
    .filter((file) => file.endsWith(".yaml") && existsSync(join(root, folder, file.replace(/yaml$/, "txt"))))
    .sort()
    .map((file) => ({
      file,
      document: read(`${folder}/${file}`),
      printed: read(`${folder}/${file.replace(/yaml$/, "txt")}`),
    }));
  const { network, trial, chemistry, duty, study } = shipped;
  const documents = {
    network: read(network),
    trial: read(trial),
    chemistry: read(chemistry),
    duty: read(duty),
    study: read(study),
  };
  const pages = "shared/reference/measured";
  const measured = readdirSync(join(root, pages))
    .filter((file) => file.endsWith(".md"))
    .sort()
    .map((file) => read(`${pages}/${file}`).trim());
  return manual({ documents, broken, measured });
}
