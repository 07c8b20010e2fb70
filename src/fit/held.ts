import { evaluateNames } from "../compile/evaluate.js";
import type { Named, Network } from "../model/network.js";
import type { Injection, Reading, Trial } from "../model/trial.js";
import type { Env } from "../model/value.js";

export type { Facts, Held } from "./held-value.js";

import { heldOfReacting, uncertainKinetics } from "./held-reacting.js";
import { type Facts, type Held, heldValue } from "./held-value.js";

/** Doses, flows of the day, feed flows, sample lines and parameters that stay at their value, each with a `±`. */
export function heldFacts(network: Network, trials: readonly Trial[], free: ReadonlySet<string>, env: Env): Held[] {
  const setByAll = (name: string): boolean => trials.every((t) => t.flows.has(name.replace(/\.flow$/, "")));
  const names = network.names.filter(
    (n) => n.role !== "constant" && !free.has(n.name) && !(n.role === "feed-flow" && setByAll(n.name)),
  );
  return [...names.flatMap((n) => heldName(network, n, env)), ...trials.flatMap((t, k) => heldOfTrial(t, k, env))];
}

/** Constants with a `±`, of the network and as the day of a trial set them. */
export function uncertainConstants(network: Network, trials: readonly Trial[], env: Env): Held[] {
  const ofNetwork = network.names.filter((n) => n.role === "constant").flatMap((n) => heldName(network, n, env));
  const ofDays = trials.flatMap((trial, k) =>
    [...trial.with].flatMap(([name, value]) =>
      heldValue(value, k, `${name} of '${trial.title}'`, env, { day: new Map([[name, 1]]) }, (t, v) => ({
        ...t,
        with: new Map(t.with).set(name, v),
      })),
    ),
  );
  return [...ofNetwork, ...ofDays, ...uncertainKinetics(trials)];
}

function heldName(network: Network, named: Named, env: Env): Held[] {
  const sd = named.value.sd?.(env) ?? 0;
  const move = (facts: Facts, by: number): void => {
    facts.values[named.name] = evaluateNames(network, facts.values)[named.slot] + by;
  };
  const direction = { names: new Map([[named.name, 1]]) };
  return sd > 0 ? [{ says: named.name, sd, move, direction: () => direction, name: named.name }] : [];
}

function heldOfTrial(trial: Trial, k: number, env: Env): Held[] {
  const of = `of '${trial.title}'`;
  const flows = [...trial.flows].flatMap(([feed, flow]) =>
    heldValue(flow, k, `flow of ${feed} ${of}`, env, { day: new Map([[`${feed}.flow`, 1]]) }, (t, v) => ({
      ...t,
      flows: new Map(t.flows).set(feed, v),
    })),
  );
  const doses = trial.injections.flatMap(({ form }, i) => {
    if (form.is === "signal") return [];
    const set = (t: Trial, changed: Injection["form"]): Trial => ({
      ...t,
      injections: t.injections.map((one, j) => (j === i ? { ...one, form: changed } : one)),
    });
    const moves = { dose: { injection: i, slope: 1 } };
    return form.is === "pulse"
      ? heldValue(form.amount, k, `dose ${of}`, env, moves, (t, amount) => set(t, { ...form, amount }))
      : heldValue(form.level, k, `step ${of}`, env, moves, (t, level) => set(t, { ...form, level }));
  });
  const levels = (trial.contents?.levels ?? []).flatMap(({ of: place, level }, i) =>
    heldValue(level, k, `contents of ${place} ${of}`, env, {}, (t, v) => ({
      ...t,
      contents: t.contents && {
        ...t.contents,
        levels: t.contents.levels.map((one, j) => (j === i ? { ...one, level: v } : one)),
      },
    })),
  );
  const lines = trial.readings.flatMap(({ line, at }, i) => {
    const set = (t: Trial, part: Partial<Reading["line"]>): Trial => ({
      ...t,
      readings: t.readings.map((one, j) => (j === i ? { ...one, line: { ...one.line, ...part } } : one)),
    });
    return [
      ...heldValue(
        line.delay,
        k,
        `line delay at ${at} ${of}`,
        env,
        { line: { reading: i, delay: 1, lag: 0 } },
        (t, delay) => set(t, { delay }),
      ),
      ...heldValue(line.lag, k, `line lag at ${at} ${of}`, env, { line: { reading: i, delay: 0, lag: 1 } }, (t, lag) =>
        set(t, { lag }),
      ),
    ];
  });
  return [...flows, ...doses, ...levels, ...lines, ...heldOfReacting(trial, k, env)];
}
