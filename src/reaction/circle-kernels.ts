import {
  type Code,
  either,
  f64,
  i32,
  type Kernel,
  kernel,
  loopWhile,
  type Variable,
} from "../numerics/wasm/assembler.js";

/** Scaled concentration at which derivatives are taken where it is lower, as `bindKinetics` takes them. */
const nearlyNone = 1e-14;

export type Name = "residual" | "linearize" | "settle";

/** What the loops are written from. */
export interface Writer {
  readonly r: number;
  readonly d: number;
  readonly free: Int32Array;
  readonly dependent: Int32Array;
  code(
    results: "made" | "slope" | "both",
    of: (component: number) => Code,
    constants: (k: number) => Code,
    local: () => Variable,
  ): { sets: Code[]; results: Code[] };
  /** What a dependent species gains of a free one; undefined where nothing. */
  follows(j: number, k: number, at: (k: number) => Code): Code | undefined;
  fall(at: (k: number) => Code): Code;
}

type Local = (type: "f64" | "i32") => Variable;

const addresses = (count: number): "i32"[] => new Array<"i32">(count).fill("i32");
const on = (address: Variable, bytes: number): Code => address.set(i32.add(address.get, i32.of(bytes)));

/** All components at a place, none below `least`, from the free ones there: code that sets them, and each by its number. */
function expand(
  w: Writer,
  y: readonly Variable[],
  fixed: Variable,
  constants: (k: number) => Code,
  least: number,
  local: Local,
): { sets: Code[]; of: (component: number) => Code } {
  const all: Variable[] = [];
  const sets: Code[] = [];
  w.free.forEach((i, k) => {
    all[i] = local("f64");
    sets.push(all[i].set(f64.max(y[k].get, f64.of(least))));
  });
  w.dependent.forEach((i, j) => {
    let sum = f64.load(fixed.get, 8 * j);
    for (let k = 0; k < w.r; k++) {
      const part = w.follows(j, k, constants);
      if (part) sum = f64.add(sum, f64.mul(part, y[k].get));
    }
    all[i] = local("f64");
    sets.push(all[i].set(f64.max(sum, f64.of(least))));
  });
  return { sets, of: (component) => all[component].get };
}

/** Sets `mix` to what enters. */
function enter(
  mix: readonly Variable[],
  y: readonly Variable[],
  first: Variable,
  { outside, own, end, column, share }: Given,
): Code[] {
  const bytes = 8 * mix.length;
  return [
    ...mix.map((m, k) => m.set(f64.add(f64.load(outside.get, 8 * k), f64.mul(f64.load(own.get), y[k].get)))),
    loopWhile(
      i32.less(column.get, i32.load(end.get)),
      ...mix.map((m, k) =>
        m.set(f64.add(m.get, f64.mul(f64.load(share.get), f64.load(i32.add(first.get, i32.load(column.get)), 8 * k)))),
      ),
      on(share, 8),
      on(column, 4),
    ),
    on(outside, bytes),
    on(own, 8),
    on(end, 4),
  ];
}

interface Given {
  readonly outside: Variable;
  readonly fixed: Variable;
  readonly memory: Variable;
  readonly own: Variable;
  readonly end: Variable;
  readonly column: Variable;
  readonly share: Variable;
  readonly constants: Variable;
  readonly last: Variable;
}

const givenOf = (p: readonly Variable[]): Given => {
  const [outside, fixed, memory, own, end, column, share, constants, last] = p;
  return { outside, fixed, memory, own, end, column, share, constants, last };
};

const loads = (y: readonly Variable[], from: Variable): Code[] => y.map((v, k) => v.set(f64.load(from.get, 8 * k)));
const isJoint = (tau: Variable): Code => f64.equal(tau.get, f64.of(0));

/** Goes over all places downstream, `y` and `mix` set to what is there and what enters; `out` goes along, `r` numbers a place. */
function downstream(
  w: Writer,
  { y, mix, tau, first }: Here,
  at: Variable,
  g: Given,
  joint: Code[],
  cell: Code[],
  out?: Variable,
): Code[] {
  return [
    first.set(at.get),
    loopWhile(
      i32.less(at.get, g.last.get),
      ...loads(y, at),
      ...enter(mix, y, first, g),
      tau.set(f64.load(g.memory.get)),
      either(isJoint(tau), joint, cell),
      ...[at, ...(out ? [out] : [])].map((a) => on(a, 8 * w.r)),
      on(g.fixed, 8 * w.d),
      on(g.memory, 8),
    ),
  ];
}

/** What a place holds, what enters it, its time constant; and the first place. */
interface Here {
  readonly y: readonly Variable[];
  readonly mix: readonly Variable[];
  readonly tau: Variable;
  readonly first: Variable;
}

function hereOf(w: Writer, local: Local): Here {
  const numbers = (): Variable[] => Array.from({ length: w.r }, () => local("f64"));
  return { y: numbers(), mix: numbers(), tau: local("f64"), first: local("i32") };
}

export const residual = (w: Writer): Kernel<Name> =>
  kernel<Name>("residual", addresses(11), undefined, ([at, f, ...rest], local) => {
    const g = givenOf(rest);
    const here = hereOf(w, local);
    const { y, mix, tau } = here;
    const constant = (k: number): Code => f64.load(g.constants.get, 8 * k);
    const { sets, of } = expand(w, y, g.fixed, constant, 0, local);
    const made = w.code("made", of, constant, () => local("f64"));
    const missed = (k: number): Code => f64.sub(mix[k].get, y[k].get);
    const joint = y.map((_, k) => f64.store(f.get, missed(k), 8 * k));
    const cell = [
      ...sets,
      ...made.sets,
      ...y.map((_, k) => f64.store(f.get, f64.add(missed(k), f64.mul(tau.get, made.results[k])), 8 * k)),
    ];
    return downstream(w, here, at, g, joint, cell, f);
  });

export const linearize = (w: Writer): Kernel<Name> =>
  kernel<Name>("linearize", [...addresses(11), "f64"], undefined, ([at, diagonal, ...rest], local) => {
    const g = givenOf(rest);
    const rate = rest[9];
    const y = Array.from({ length: w.r }, () => local("f64"));
    const tau = local("f64");
    const constant = (k: number): Code => f64.load(g.constants.get, 8 * k);
    const { sets, of } = expand(w, y, g.fixed, constant, nearlyNone, local);
    const slope = w.code("slope", of, constant, () => local("f64"));
    const cells = slope.results.map((_, e) => e);
    const onDiagonal = (e: number): boolean => e % (w.r + 1) === 0;
    const rest1 = (more: Code): Code => f64.sub(more, f64.load(g.own.get));
    return [
      loopWhile(
        i32.less(at.get, g.last.get),
        tau.set(f64.load(g.memory.get)),
        either(
          isJoint(tau),
          cells.map((e) => f64.store(diagonal.get, onDiagonal(e) ? rest1(f64.of(1)) : f64.of(0), 8 * e)),
          [
            ...loads(y, at),
            ...sets,
            ...slope.sets,
            ...cells.map((e) =>
              f64.store(
                diagonal.get,
                f64.sub(
                  onDiagonal(e) ? rest1(f64.add(f64.of(1), f64.mul(tau.get, rate.get))) : f64.of(0),
                  f64.mul(tau.get, slope.results[e]),
                ),
                8 * e,
              ),
            ),
          ],
        ),
        on(at, 8 * w.r),
        on(diagonal, 8 * w.r * w.r),
        on(g.fixed, 8 * w.d),
        on(g.memory, 8),
        on(g.own, 8),
      ),
    ];
  });

export const settle = (w: Writer): Kernel<Name> =>
  kernel<Name>("settle", addresses(10), undefined, ([at, ...rest], local) => {
    const g = givenOf(rest);
    const here = hereOf(w, local);
    const { y, mix, tau } = here;
    const matrix = Array.from({ length: w.r * w.r }, () => local("f64"));
    const constant = (k: number): Code => f64.load(g.constants.get, 8 * k);
    const { sets, of } = expand(w, y, g.fixed, constant, nearlyNone, local);
    const laws = w.code("both", of, constant, () => local("f64"));
    // mix becomes what the balance misses, then the step.
    const set = [
      ...mix.map((m, k) => m.set(f64.add(f64.sub(m.get, y[k].get), f64.mul(tau.get, laws.results[k])))),
      ...matrix.map((a, e) =>
        a.set(f64.sub(f64.of(e % (w.r + 1) === 0 ? 1 : 0), f64.mul(tau.get, laws.results[w.r + e]))),
      ),
    ];
    const finite = mix.map((m) => f64.less(f64.abs(m.get), f64.of(1e300))).reduce((a, b) => i32.and(a, b));
    const stepped = (k: number): Code => f64.max(f64.add(y[k].get, mix[k].get), f64.mul(w.fall(constant), y[k].get));
    const joint = mix.map((m, k) => f64.store(at.get, m.get, 8 * k));
    const step = either(
      finite,
      mix.map((_, k) => f64.store(at.get, stepped(k), 8 * k)),
      [],
    );
    return downstream(w, here, at, g, joint, [...sets, ...laws.sets, ...set, ...eliminate(matrix, mix), step]);
  });

/** Solves a small system, row-major, by elimination in the order in which it stands; b becomes x. */
function eliminate(a: readonly Variable[], b: readonly Variable[]): Code[] {
  const n = b.length;
  const code: Code[] = [];
  const less = (x: Variable, by: Variable, times: Variable): void => {
    code.push(x.set(f64.sub(x.get, f64.mul(by.get, times.get))));
  };
  for (let k = 0; k < n; k++) {
    for (let i = k + 1; i < n; i++) {
      const factor = a[i * n + k];
      code.push(factor.set(f64.div(factor.get, a[k * n + k].get)));
      for (let j = k + 1; j < n; j++) less(a[i * n + j], factor, a[k * n + j]);
      less(b[i], factor, b[k]);
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    for (let j = k + 1; j < n; j++) less(b[k], a[k * n + j], b[j]);
    code.push(b[k].set(f64.div(b[k].get, a[k * n + k].get)));
  }
  return code;
}
