import type { Compartment } from "./network.js";

/** Names of the equal bodies that a `repeat:` makes of a compartment; none where it is a single one. */
export const membersOf = ({ name, counts }: Pick<Compartment, "name" | "counts">): string[] =>
  (counts.repeat ?? 1) > 1 ? Array.from({ length: counts.repeat }, (_, i) => `${name}.${i + 1}`) : [];

/** The compartment that a name is a member of: `chain` for `chain.2`. */
export const memberOf = <C extends Pick<Compartment, "name" | "counts">>(
  compartments: readonly C[],
  name: string,
): C | undefined => {
  const suffix = memberNumber(name);
  if (suffix === undefined) return undefined;
  const owner = name.slice(0, name.lastIndexOf("."));
  const body = compartments.find((c) => c.name === owner);
  const repeat = body?.counts.repeat ?? 1;
  return repeat > 1 && suffix <= repeat ? body : undefined;
};

/** The number at the end of a name such as `chain.2`. */
export const memberNumber = (name: string): number | undefined => {
  const suffix = /\.([1-9]\d*)$/.exec(name)?.[1];
  return suffix === undefined ? undefined : Number(suffix);
};

/** The row of which a name speaks, though it has no such member: `chain` for `chain.5` where there are four. */
export const rowMeant = <C extends Pick<Compartment, "name" | "counts">>(
  compartments: readonly C[],
  name: string,
): { readonly name: string; readonly tanks: number } | undefined => {
  const owner = /^(.+)\.[^.]+$/.exec(name)?.[1];
  const row = owner === undefined ? undefined : compartments.find((c) => c.name === owner);
  const tanks = row?.counts.repeat ?? 1;
  return row && tanks > 1 ? { name: row.name, tanks } : undefined;
};
