import { entry } from "../problem.js";

/** A trial held against the vessel that was tested. */
export const vesselTrialEntries = {
  "closed-inlet": entry<{ at: string }>({
    severity: "error",
    says: ({ at }) => `nothing enters a closed vessel, so no concentration can enter it at '${at}'`,
    fix: "put an amount in with `pulse:` (and `lasting:`), dose with a rate such as `step: 3 g/min`, or let it start with `contents:`",
  }),
  "contents-nothing": entry<{ name: string; why: string }>({
    severity: "error",
    says: ({ name, why }) => `'${name}' cannot start with tracer inside: ${why}`,
    fix: "name a body that holds liquid which the flow reaches, or `all`",
  }),
  "follows-unknown": entry<{ name: string; nearest: string | undefined; known: readonly string[] }>({
    severity: "error",
    says: ({ name }) => `no \`sends\` of the network names '${name}'`,
    fix: ({ nearest, known }) =>
      nearest
        ? `did you mean '${nearest}'?`
        : known.length > 0
          ? `there are ${known.join(", ")}`
          : "say in the network where it divides otherwise than the liquid, such as `sends: {solids: {sludge: 98 %, effluent: rest}}`, or take `follows` out",
  }),
} as const;
