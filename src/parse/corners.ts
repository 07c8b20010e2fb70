import { problemFinder } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Named, Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";

/** Above this many parameters only the corners with one parameter moved are looked at. */
const fewParameters = 8;
/** Corners times compartments: above it too, since a check should be over before one has looked away. */
const mostWork = 20_000;

/** Warns once where a corner of the bounds that `requires:` allows makes a volume or flow impossible. */
export function cornerWarnings(network: Network, report: Report): void {
  const moved = network.names.filter((n) => n.between && network.used.has(n.name));
  const most = Math.min(fewParameters, Math.log2(mostWork / network.compartments.length));
  const problemsAt = problemFinder(network);
  const ends = endsOf(network, moved);
  const why = (settings: Settings): string | undefined => {
    const values = evaluateNames(network, settings);
    if (network.requires.some((r) => !(r.slack(values) > 0))) return undefined;
    return problemsAt(settings)[0]?.message;
  };
  const shownIn = ({ unit, dimension }: Value): Unit => (unit?.name === "" ? unit : network.units.unitFor(dimension));
  for (const settings of cornersOf(moved, ends, moved.length > most)) {
    if (why(settings) === undefined) continue;
    const least = withoutIdle(settings, why);
    const corner = moved.flatMap((n) =>
      n.name in least ? `${n.name} = ${formatQuantity(least[n.name], shownIn(n.value), 6)}` : [],
    );
    const first = moved.find((n) => n.name in least) ?? moved[0];
    const bound = first.between?.[least[first.name] === ends.get(first.name)?.[0] ? 0 : 1];
    report("bound-corner", bound?.at ?? first.at, { corner, why: why(least) ?? "" });
    return;
  }
}

function endsOf(network: Network, moved: readonly Named[]): Map<string, readonly number[]> {
  const env = evaluateNames(network);
  return new Map(moved.map((n) => [n.name, (n.between ?? []).map((b) => b.of(env))]));
}

function* cornersOf(
  moved: readonly Named[],
  ends: ReadonlyMap<string, readonly number[]>,
  alone: boolean,
): Generator<Settings> {
  const end = (n: Named, which: number): [string, number] => [n.name, ends.get(n.name)?.[which] ?? Number.NaN];
  if (alone) {
    for (const n of moved) for (const which of [0, 1]) yield Object.fromEntries([end(n, which)]);
  } else {
    for (let c = 1; c <= 2 ** moved.length; c++) {
      yield Object.fromEntries(moved.map((n, i) => end(n, (c >> i) & 1)));
    }
  }
}

/** The corner without the parameters that may as well stay at their start. */
function withoutIdle(settings: Settings, why: (settings: Settings) => string | undefined): Settings {
  let least = settings;
  for (const name of Object.keys(settings)) {
    const { [name]: _, ...fewer } = least;
    if (why(fewer) !== undefined) least = fewer;
  }
  return least;
}
