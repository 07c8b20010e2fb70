/** Bundles `src/cli` of `root` into the folder `dist`. */
export function buildProgram(root: string, dist: string, version: string): Promise<void>;

/** Leaves the compiled code of what `commands` (lists of arguments) use beside the chunks. */
export function keepCompiled(root: string, dist: string, commands: readonly (readonly string[])[]): Promise<void>;
