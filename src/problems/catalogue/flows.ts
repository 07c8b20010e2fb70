import { entry } from "../problem.js";

/** Streams, flows and volumes. */
export const flowEntries = {
  "share-sum": entry<{ name: string; total: string }>({
    severity: "error",
    says: ({ name, total }) => `shares out of '${name}' add to ${total}`,
    fix: "write `rest` for one of them, or make them add to 100 %",
  }),
  "share-range": entry<{ name: string; to: string; value: string }>({
    severity: "error",
    says: ({ name, to, value }) => `the share from '${name}' to '${to}' is ${value}`,
    fix: "a share lies between 0 % and 100 %",
  }),
  "rest-twice": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `\`rest\` stands more than once among the streams out of '${name}'`,
    fix: "keep one `rest` and give the others a share or a flow",
  }),
  "rest-missing": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' sends a fixed flow but says nothing of the rest`,
    fix: "send `rest` somewhere, for example {loop: 4 L/min, out: rest}",
  }),
  "fixed-flow-too-large": entry<{ name: string; fixed: string; arrives: string }>({
    severity: "error",
    says: ({ name, fixed, arrives }) => `'${name}' should send ${fixed} but only ${arrives} arrives there`,
    fix: "lower the fixed flow, or bring more to it",
  }),
  "negative-volume": entry<{ name: string; value: string }>({
    severity: "error",
    says: ({ name, value }) => `the volume of '${name}' is ${value}`,
    fix: "a volume cannot be below zero; look at the values it is made of",
  }),
  "negative-flow": entry<{ name: string; value: string }>({
    severity: "error",
    says: ({ name, value }) => `the flow ${name} is ${value}`,
    fix: "a flow cannot be below zero; turn the stream round instead",
  }),
  "feed-zero": entry<{ name: string; value: string }>({
    severity: "error",
    says: ({ name, value }) => `the feed '${name}' flows at ${value}`,
    fix: "give it a flow above zero, or take the feed out",
  }),
  "no-feed": entry<Record<never, never>>({
    severity: "error",
    says: () => "the network has no feed",
    fix: "declare one, such as `feeds: {feed: {flow: 10 L/min, to: bulk}}`; closed vessels are not in this version",
  }),
  "no-outlet": entry<Record<never, never>>({
    severity: "error",
    says: () => "the network has no outlet",
    fix: "declare one, such as `outlets: [product]`, and send a stream to it",
  }),
  "no-way-out": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `nothing leaves '${name}'`,
    fix: "give it a `to:`; if the flow never reaches it, make it `kind: dead`",
  }),
  "dead-with-streams": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' is dead volume, so no stream can enter or leave it`,
    fix: "take the stream out, or make it `kind: stirred`",
  }),
  "closed-loop": entry<{ names: readonly string[] }>({
    severity: "error",
    says: ({ names }) => `what enters ${names.map((n) => `'${n}'`).join(", ")} never reaches an outlet`,
    fix: "send a share of it to an outlet",
  }),
  unreachable: entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `no stream reaches '${name}'`,
    fix: "send a stream to it or give it an exchange; if the flow never reaches it, make it `kind: dead`",
  }),
  "into-feed": entry<{ name: string; from: string }>({
    severity: "error",
    says: ({ name, from }) => `'${from}' sends a stream into the feed '${name}'`,
    fix: "send it to the compartment that the feed enters",
  }),
  "stream-twice": entry<{ from: string; to: string }>({
    severity: "error",
    says: ({ from, to }) => `'${from}' sends two streams to '${to}'`,
    fix: "add them into one",
  }),
  "exchange-partner": entry<{ name: string; partner: string; why: string }>({
    severity: "error",
    says: ({ name, partner, why }) => `'${name}' cannot exchange with '${partner}': ${why}`,
    fix: "exchange works between two single stirred tanks; write it on one of them",
  }),
  "exchange-twice": entry<{ name: string; partner: string }>({
    severity: "error",
    says: ({ name, partner }) => `the exchange between '${name}' and '${partner}' is written twice`,
    fix: "write it on one side only: it flows both ways",
  }),
  "outlet-dry": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `no stream reaches the outlet '${name}'`,
    fix: "send a stream to it or take it out of `outlets`",
  }),
  "share-all": entry<{ name: string; parameter: string }>({
    severity: "warning",
    says: ({ name, parameter }) => `'${parameter}' may take all the flow of '${name}' and leave nothing for \`rest\``,
    fix: "set the upper bound of the share below 100 %",
  }),
} as const;
