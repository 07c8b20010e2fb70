import type { Compartment } from "./network.js";

/** Names of the equal bodies that a `repeat:` makes of a compartment; none where it is a single one. */
export const membersOf = ({ name, counts }: Pick<Compartment, "name" | "counts">): string[] =>
  (counts.repeat ?? 1) > 1 ? Array.from({ length: counts.repeat }, (_, i) => `${name}.${i + 1}`) : [];

/** The compartment that a name is a member of: `chain` for `chain.2`. */
export const memberOf = (compartments: readonly Compartment[], name: string): Compartment | undefined => {
  const [, owner, suffix] = /^(.+)\.([1-9]\d*)$/.exec(name) ?? [];
  const body = compartments.find((c) => c.name === owner);
  const repeat = body?.counts.repeat ?? 1;
  return repeat > 1 && Number(suffix) <= repeat ? body : undefined;
};
