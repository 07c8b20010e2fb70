import { entry } from "../problem.js";

const quoted = (names: readonly string[]): string => names.map((n) => `'${n}'`).join(", ");

/** Streams, flows and volumes. */
export const flowEntries = {
  "share-sum": entry<{ name: string; total: string; rest: boolean }>({
    severity: "error",
    says: ({ name, total, rest }) => `shares out of '${name}' add to ${total}${rest ? " and leave no `rest`" : ""}`,
    fix: ({ rest }) =>
      rest ? "lower them to 100 % or less together" : "write `rest` in place of one of them, or make them add to 100 %",
  }),
  "share-range": entry<{ name: string; to: string; value: string; recycle: string | undefined }>({
    severity: "error",
    says: ({ name, to, value }) => `the share from '${name}' to '${to}' is ${value}`,
    fix: ({ value, recycle }) =>
      `a share is of all that leaves, so it lies between 0 % and 100 %${
        recycle ? `: ${value} of what goes on is a share of ${recycle}` : ""
      }`,
  }),
  "stream-twice": entry<{ name: string; to: string; before: string }>({
    severity: "error",
    says: ({ name, to, before }) => `'${name}' sends to '${to}' besides '${before}', which is the same place`,
    fix: "make one stream of the two; a row is entered at its first tank, a part at its only inlet",
  }),
  "rest-twice": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `\`rest\` stands more than once among the streams out of '${name}'`,
    fix: "keep one `rest` and give the others a share or a flow",
  }),
  "rest-missing": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' sends a fixed flow, but no stream takes the rest`,
    fix: "write `rest` for one of its streams, such as {loop: 4 L/min, out: rest}",
  }),
  "fixed-flow-too-large": entry<{ name: string; fixed: string; arrives: string; several: boolean }>({
    severity: "error",
    says: ({ name, fixed, arrives, several }) =>
      `'${name}' should send ${fixed}${several ? " in all" : ""} beside \`rest\`, but only ${arrives} arrives there`,
    fix: ({ arrives }) => `send less than ${arrives}, or bring more to it`,
  }),
  "negative-volume": entry<{ name: string; value: string }>({
    severity: "error",
    says: ({ name, value }) => `the volume of '${name}' is ${value}`,
    fix: "a volume cannot be below zero; look at the values that it is made of",
  }),
  "negative-flow": entry<{ name: string; value: string; exchange: boolean }>({
    severity: "error",
    says: ({ name, value }) => `the flow ${name} is ${value}`,
    fix: ({ exchange }) =>
      exchange
        ? "an exchange flows both ways, so it has no sign: write it as a flow above zero"
        : "a flow cannot be below zero; look at the values that it is made of, or write the stream the other way round",
  }),
  "out-of-range": entry<{ name: string; key: string; value: string; limit: string; least: boolean }>({
    severity: "error",
    says: ({ name, key, value }) => `the \`${key}\` of '${name}' is ${value}`,
    fix: ({ limit, least }) =>
      `it must be ${least ? `at least ${limit}` : `above ${limit}`}; look at the values that it is made of`,
  }),
  "not-finite": entry<{ what: string; infinite: boolean }>({
    severity: "error",
    says: ({ what, infinite }) => `${what} ${infinite ? "is infinite" : "cannot be computed"}`,
    fix: "look for a division by zero, a root or logarithm of a negative number, or a power that grows too large in what it is made of",
  }),
  "feed-zero": entry<{ name: string; value: string }>({
    severity: "error",
    says: ({ name, value }) => `the feed '${name}' flows at ${value}`,
    fix: "give it a flow above zero, or take the feed out",
  }),
  "no-feed": entry<Record<never, never>>({
    severity: "error",
    says: () => "the network has no feed",
    fix: "declare one, such as `feeds: {feed: {flow: 10 L/min, to: bulk}}`; a closed vessel has neither feeds nor outlets",
  }),
  "no-outlet": entry<Record<never, never>>({
    severity: "error",
    says: () => "the network has no outlet",
    fix: "declare one, such as `outlets: [product]`, and send a stream to it; a closed vessel has neither feeds nor outlets",
  }),
  "no-way-out": entry<{ name: string; feed: boolean }>({
    severity: "error",
    says: ({ name, feed }) =>
      feed ? `the feed '${name}' goes nowhere` : `what streams bring into '${name}' has no way out`,
    fix: ({ feed }) =>
      feed
        ? "say under `to:` where it goes"
        : "say under `to:` where it goes; a quiet corner takes an `exchange`, not a stream",
  }),
  "dead-with-streams": entry<{ name: string; from: string }>({
    severity: "error",
    says: ({ name, from }) => `'${from}' sends a stream into '${name}', which is dead volume`,
    fix: ({ name }) => `take the stream out, or give '${name}' another \`kind\` and a \`to\``,
  }),
  "closed-loop": entry<{ names: readonly string[] }>({
    severity: "error",
    says: ({ names }) =>
      names.length === 1
        ? `all that leaves ${quoted(names)} returns to it, so that none of it reaches an outlet`
        : `streams go round among ${quoted(names)} and never reach an outlet`,
    fix: "send a share of one of them on towards an outlet",
  }),
  "loop-unbounded": entry<{ names: readonly string[] }>({
    severity: "error",
    says: ({ names }) => `the flow that goes round through ${quoted(names)} has no end: no share of it leaves`,
    fix: "let a share above 0 % of it go on towards an outlet; fixed flows alone do not settle it",
  }),
  "sends-where": entry<{ name: string; body: string; nearest: string | undefined; known: readonly string[] }>({
    severity: "error",
    says: ({ name, body }) => `'${body}' has no stream to '${name}' that a substance could take`,
    fix: ({ nearest, known }) =>
      nearest
        ? `did you mean '${nearest}'?`
        : known.length > 0
          ? `name the streams as \`to:\` does: ${known.join(", ")}`
          : "say under `to:` where its outflow goes first",
  }),
  "sends-range": entry<{ name: string; of: string; to: string; value: string }>({
    severity: "error",
    says: ({ name, of, to, value }) => `the share of '${of}' from '${name}' to '${to}' is ${value}`,
    fix: ({ of, name }) => `it is of all of '${of}' that leaves '${name}', so it lies between 0 % and 100 %`,
  }),
  "sends-rest": entry<{ name: string; of: string }>({
    severity: "error",
    says: ({ name, of }) => `\`rest\` stands more than once among the shares of '${of}' out of '${name}'`,
    fix: "keep one `rest` and give the others a share",
  }),
  "sends-sum": entry<{ name: string; of: string; total: string; rest: boolean }>({
    severity: "error",
    says: ({ name, of, total, rest }) =>
      `shares of '${of}' out of '${name}' add to ${total}${rest ? " and leave no `rest`" : ""}`,
    fix: ({ rest }) =>
      rest ? "lower them to 100 % or less together" : "write `rest` for one of its streams, or make them add to 100 %",
  }),
  "sends-dry": entry<{ name: string; to: string; of: string; share: string }>({
    severity: "error",
    says: ({ name, to, of, share }) => `'${name}' sends ${share} of '${of}' to '${to}', but no liquid to carry it`,
    fix: "send some liquid there, too; a substance moves only with what flows",
  }),
  "sends-trapped": entry<{ of: string; names: readonly string[] }>({
    severity: "error",
    says: ({ of, names }) =>
      names.length === 1
        ? `'${of}' that gets into ${quoted(names)} never leaves: no way that it is sent leads to an outlet`
        : `'${of}' that gets in among ${quoted(names)} never leaves: no way that it is sent leads to an outlet`,
    fix: ({ of }) =>
      `send a share of '${of}' on towards an outlet, however small: what is held back for ever has no steady state`,
  }),
  "closed-apart": entry<{ names: readonly string[]; from: string }>({
    severity: "error",
    says: ({ names, from }) => `in this closed vessel nothing joins ${quoted(names)} with '${from}'`,
    fix: "join them by streams or an exchange, or describe each vessel in a file of its own; what stands idle in a vessel is `kind: dead`",
  }),
  "closed-mean-time": entry<Record<never, never>>({
    severity: "error",
    says: () => "nothing leaves a closed vessel, so it has no mean time to check",
    fix: "check a `volume` or a `flow`: the time to go round once is the one over the other",
  }),
  "closed-unbalanced": entry<{ name: string; arrives: string; sends: string }>({
    severity: "error",
    says: ({ name, arrives, sends }) => `${arrives} arrives at '${name}', but it sends ${sends}`,
    fix: ({ arrives }) =>
      `in a closed vessel the flows must balance at every place: let it send ${arrives}, or send it what it sends; one name under \`to:\` takes all that arrives`,
  }),
  "closed-flow-open": entry<{ names: readonly string[] }>({
    severity: "error",
    says: ({ names }) => `nothing says how much goes round through ${quoted(names)}`,
    fix: ({ names }) =>
      `nothing enters a closed vessel, so one of its streams must be a fixed flow, such as \`${names[0]}: {to: {${names[1] ?? names[0]}: 4 L/min}}\``,
  }),
  unreachable: entry<{ names: readonly string[] }>({
    severity: "error",
    says: ({ names }) => `no stream reaches ${quoted(names)}`,
    fix: ({ names }) =>
      `send a stream to ${names.length === 1 ? "it" : "one of them"} or give it an exchange; if the flow never gets there, make it \`kind: dead\``,
  }),
  "into-feed": entry<{ name: string; from: string; enters: string | undefined }>({
    severity: "error",
    says: ({ name, from }) => `'${from}' sends a stream into the feed '${name}'`,
    fix: ({ enters }) =>
      enters ? `send it to '${enters}', which the feed enters` : "send it to the compartment that the feed enters",
  }),
  "exchange-partner": entry<{ name: string; partner: string; why: string; row: string | undefined }>({
    severity: "error",
    says: ({ name, partner, why }) => `'${name}' cannot exchange with '${partner}': ${why}`,
    fix: ({ row }) =>
      `${
        row
          ? `say which tank of the row, at the other tank: \`exchange: {${row}.2: 1 L/min}\``
          : "exchange works between two different single tanks of `kind: stirred`"
      }; pockets along a ${row ? "" : "tube or a "}row of tanks are its \`stagnant: {volume: 20 L, exchange: 1 L/min}\``,
  }),
  "exchange-twice": entry<{ name: string; partner: string }>({
    severity: "error",
    says: ({ name, partner }) => `the exchange between '${name}' and '${partner}' is written twice`,
    fix: "write it on one side only: it flows both ways",
  }),
  "outlet-dry": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `nothing flows to the outlet '${name}'`,
    fix: "send a stream to it or take it out of `outlets`",
  }),
  "share-all": entry<{ name: string; parameter: string }>({
    severity: "warning",
    says: ({ name, parameter }) => `'${parameter}' may take all the flow of '${name}' and leave nothing for \`rest\``,
    fix: "set the upper bound of the share below 100 %",
  }),
  "exchange-fast": entry<{ name: string; partner: string; flow: string; times: string }>({
    severity: "warning",
    says: ({ name, partner, flow, times }) =>
      `'${name}' and '${partner}' exchange ${flow}, ${times} times what flows through them: they act as one tank`,
    fix: "make them one tank with the volume of both, or lower the exchange",
  }),
  "stagnant-fast": entry<{ name: string; flow: string; times: string }>({
    severity: "warning",
    says: ({ name, flow, times }) =>
      `'${name}' and its pockets exchange ${flow}, ${times} times what flows through: they act as one`,
    fix: "add the pockets to the `volume` and leave `stagnant` out, or lower the exchange",
  }),
  "volume-zero": entry<{ name: string }>({
    severity: "warning",
    says: ({ name }) => `the volume of '${name}' is written as 0: it holds nothing`,
    fix: "write `kind: junction` where streams only meet, or give it its volume",
  }),
  "share-zero": entry<{ name: string; to: string }>({
    severity: "warning",
    says: ({ name, to }) => `the share from '${name}' to '${to}' is written as 0: nothing flows there`,
    fix: "take the stream out, or give it its share",
  }),
  "volume-off": entry<{ sum: string; stated: string }>({
    severity: "warning",
    says: ({ sum, stated }) => `the volumes add to ${sum}, but the vessel is stated to hold ${stated}`,
    fix: "make one volume the rest, such as `volume: total - riser`, or name what the flow never reaches as `kind: dead`",
  }),
} as const;
