/** A smooth function of several numbers, with its derivatives. */
export interface SmoothFunction {
  value(x: Float64Array): number;
  /** By argument. */
  readonly partials: readonly ((x: Float64Array) => number)[];
}

const Op = { Constant: 0, Input: 1, Add: 2, Subtract: 3, Multiply: 4, Divide: 5, Call: 6 } as const;

/** A number of a recorded calculation, by its place in it. */
export type Slot = number;

/** One operation: on the slots a and b; a is the number of an input, `value` that of a constant. */
export interface Step {
  readonly does: "constant" | "input" | "add" | "subtract" | "multiply" | "divide";
  readonly a: Slot;
  readonly b: Slot;
  readonly value: number;
}

interface Call {
  readonly of: SmoothFunction;
  readonly args: readonly Slot[];
}

/**
 * Records a calculation as a straight line of operations, to be run again at other inputs. What is made of constants alone is a
 * constant at once, and what is written twice is recorded once.
 */
export class Tape {
  private readonly ops: number[] = [];
  private readonly left: number[] = [];
  private readonly right: number[] = [];
  private readonly constants = new Map<Slot, number>();
  private readonly slots = new Map<string, Slot>();
  private readonly calls = new Map<Slot, Call>();
  private inputs = 0;

  /** The next input. */
  input(): Slot {
    return this.push(Op.Input, this.inputs++, 0);
  }

  constant(x: number): Slot {
    const key = Object.is(x, -0) ? "-0" : String(x);
    const known = this.slots.get(key);
    if (known !== undefined) return known;
    const slot = this.push(Op.Constant, 0, 0);
    this.constants.set(slot, x);
    this.slots.set(key, slot);
    return slot;
  }

  /** The value of what does not depend on the inputs. */
  known(slot: Slot): number | undefined {
    return this.constants.get(slot);
  }

  add(a: Slot, b: Slot): Slot {
    if (this.known(a) === 0) return b;
    if (this.known(b) === 0) return a;
    return this.binary(Op.Add, a, b, (x, y) => x + y);
  }

  subtract(a: Slot, b: Slot): Slot {
    if (this.known(b) === 0) return a;
    return this.binary(Op.Subtract, a, b, (x, y) => x - y);
  }

  multiply(a: Slot, b: Slot): Slot {
    if (this.known(a) === 1) return b;
    if (this.known(b) === 1) return a;
    if (this.known(a) === 0 || this.known(b) === 0) return this.constant(0);
    return this.binary(Op.Multiply, a, b, (x, y) => x * y);
  }

  divide(a: Slot, b: Slot): Slot {
    if (this.known(b) === 1) return a;
    return this.binary(Op.Divide, a, b, (x, y) => x / y);
  }

  negate(a: Slot): Slot {
    return this.subtract(this.constant(0), a);
  }

  sum(terms: readonly Slot[]): Slot {
    return terms.reduce((sum, t) => this.add(sum, t), this.constant(0));
  }

  call(of: SmoothFunction, args: readonly Slot[]): Slot {
    const known = args.map((a) => this.known(a));
    if (known.every((x) => x !== undefined)) return this.constant(of.value(Float64Array.from(known)));
    const slot = this.push(Op.Call, 0, 0);
    this.calls.set(slot, { of, args });
    return slot;
  }

  /** What was recorded so far, ready to run. */
  program(): Program {
    return new Program(this.ops, this.left, this.right, this.constants, this.calls, this.inputs);
  }

  private binary(op: number, a: Slot, b: Slot, of: (x: number, y: number) => number): Slot {
    const [x, y] = [this.known(a), this.known(b)];
    if (x !== undefined && y !== undefined) return this.constant(of(x, y));
    const key = `${op} ${a} ${b}`;
    const known = this.slots.get(key);
    if (known !== undefined) return known;
    const slot = this.push(op, a, b);
    this.slots.set(key, slot);
    return slot;
  }

  private push(op: number, a: number, b: number): Slot {
    this.left.push(a);
    this.right.push(b);
    return this.ops.push(op) - 1;
  }
}

/**
 * A recorded calculation. Derivatives along several directions are carried beside the values, operation by operation: exact.
 * @see A. Griewank, A. Walther, Evaluating Derivatives, 2nd ed., SIAM 2008, ch. 3 (forward mode)
 */
export class Program {
  /** By slot, of the last run. */
  readonly value: Float64Array;
  /** By slot and direction, `directions` in a row for each slot, of the last run of `slopes`. */
  slope = new Float64Array(0);
  private directions = -1;
  private readonly op: Uint8Array;
  private readonly a: Int32Array;
  private readonly b: Int32Array;
  private readonly calls: { of: SmoothFunction; args: Int32Array; x: Float64Array }[] = [];

  constructor(
    ops: readonly number[],
    left: readonly number[],
    right: readonly number[],
    constants: ReadonlyMap<Slot, number>,
    calls: ReadonlyMap<Slot, Call>,
    readonly inputs: number,
  ) {
    this.op = Uint8Array.from(ops);
    this.a = Int32Array.from(left);
    this.b = Int32Array.from(right);
    this.value = new Float64Array(ops.length);
    for (const [slot, x] of constants) this.value[slot] = x;
    for (const [slot, { of, args }] of calls) {
      this.a[slot] = this.calls.length;
      this.calls.push({ of, args: Int32Array.from(args), x: new Float64Array(args.length) });
    }
  }

  /** The operations one after the other; undefined where one is a function that is called. */
  line(): readonly Step[] | undefined {
    if (this.calls.length > 0) return undefined;
    const of = ["constant", "input", "add", "subtract", "multiply", "divide"] as const;
    return Array.from(this.op, (op, i) => ({ does: of[op], a: this.a[i], b: this.b[i], value: this.value[i] }));
  }

  run(inputs: ArrayLike<number>): void {
    const { op, a, b, value } = this;
    for (let i = 0; i < op.length; i++) {
      switch (op[i]) {
        case Op.Input:
          value[i] = inputs[a[i]];
          break;
        case Op.Add:
          value[i] = value[a[i]] + value[b[i]];
          break;
        case Op.Subtract:
          value[i] = value[a[i]] - value[b[i]];
          break;
        case Op.Multiply:
          value[i] = value[a[i]] * value[b[i]];
          break;
        case Op.Divide:
          value[i] = value[a[i]] / value[b[i]];
          break;
        case Op.Call: {
          const { of, args, x } = this.calls[a[i]];
          for (let k = 0; k < args.length; k++) x[k] = value[args[k]];
          value[i] = of.value(x);
          break;
        }
      }
    }
  }

  /**
   * Fills `slope` with derivatives at the inputs of the last run.
   * @param seeds  by input and direction: how the inputs move, `directions` in a row for each input
   */
  slopes(seeds: Float64Array, directions: number): void {
    if (directions !== this.directions) {
      this.directions = directions;
      this.slope = new Float64Array(this.op.length * directions);
    }
    const { op, a, b, value, slope } = this;
    const m = directions;
    for (let i = 0; i < op.length; i++) {
      const at = i * m;
      const from = a[i] * m;
      const and = b[i] * m;
      switch (op[i]) {
        case Op.Input:
          for (let d = 0; d < m; d++) slope[at + d] = seeds[from + d];
          break;
        case Op.Add:
          for (let d = 0; d < m; d++) slope[at + d] = slope[from + d] + slope[and + d];
          break;
        case Op.Subtract:
          for (let d = 0; d < m; d++) slope[at + d] = slope[from + d] - slope[and + d];
          break;
        case Op.Multiply: {
          const x = value[a[i]];
          const y = value[b[i]];
          for (let d = 0; d < m; d++) slope[at + d] = slope[from + d] * y + x * slope[and + d];
          break;
        }
        case Op.Divide: {
          const y = value[b[i]];
          const q = value[i];
          for (let d = 0; d < m; d++) slope[at + d] = (slope[from + d] - q * slope[and + d]) / y;
          break;
        }
        case Op.Call:
          this.callSlopes(i, m);
          break;
      }
    }
  }

  private callSlopes(i: number, m: number): void {
    const { value, slope } = this;
    const { of, args, x } = this.calls[this.a[i]];
    slope.fill(0, i * m, (i + 1) * m);
    for (let k = 0; k < args.length; k++) x[k] = value[args[k]];
    for (let k = 0; k < args.length; k++) {
      const partial = of.partials[k](x);
      for (let d = 0; d < m; d++) slope[i * m + d] += partial * slope[args[k] * m + d];
    }
  }
}
