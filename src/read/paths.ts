/**
 * The path of a file named in another file: relative to the folder of that file, in normal form with forward slashes.
 * What was read from standard input (`-`) lies in the current folder.
 */
export function beside(path: string, relative: string): string {
  if (isAbsolute(relative)) return normalise(relative);
  const folder = forward(path).replace(/[^/]*$/, "");
  return normalise(folder + forward(relative));
}

/** Without `.` and inner `..`, with forward slashes; the current folder is `.`. */
export function normalise(path: string): string {
  const [, root, rest] = /^([A-Za-z]:\/|\/|)(.*)$/s.exec(forward(path)) as unknown as [string, string, string];
  const parts: string[] = [];
  for (const part of rest.split("/")) {
    if (part === "" || part === ".") continue;
    if (part !== ".." || (parts.length === 0 && root === "") || parts.at(-1) === "..") parts.push(part);
    else parts.pop();
  }
  return root + parts.join("/") || ".";
}

const forward = (path: string): string => path.replace(/\\/g, "/");

const isAbsolute = (path: string): boolean => /^([A-Za-z]:)?[\\/]/.test(path);
