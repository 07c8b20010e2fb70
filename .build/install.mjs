// Installs the packages of the lock file where they are missing or differ from it; otherwise does nothing, and quickly.
import { execFileSync } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

const root = dirname(dirname(fileURLToPath(import.meta.url)));

const read = (path) => (existsSync(path) ? JSON.parse(readFileSync(path, "utf8")).packages : undefined);

/** npm keeps a lock file of what is installed; packages for other systems are absent from it. */
function installed() {
  const wanted = read(join(root, "package-lock.json"));
  const have = read(join(root, "node_modules/.package-lock.json"));
  if (!wanted || !have) return false;
  return Object.entries(wanted).every(
    ([path, { version, optional }]) => path === "" || (have[path] ? have[path].version === version : optional === true),
  );
}

if (!installed())
  execFileSync("npm", ["ci", "--no-fund", "--no-audit"], {
    cwd: root,
    stdio: "inherit",
    shell: process.platform === "win32",
  });
