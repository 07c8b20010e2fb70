/**
 * A small assembler for WebAssembly: instructions as bytes, nested as their expressions are until the module is written. Only what
 * kernels over arrays need.
 * @see A. Rossberg (ed.), WebAssembly Core Specification 2.0, W3C 2022, chapter 5 (binary format)
 */
export type Code = readonly (number | Code)[];

export type ValueType = "i32" | "f64" | "v128";

/** A variable of a function: a parameter or a local. */
export interface Variable {
  readonly type: ValueType;
  readonly get: Code;
  set(value: Code): Code;
  /** Sets it and leaves the value. */
  tee(value: Code): Code;
}

const typeByte = { i32: 0x7f, f64: 0x7c, v128: 0x7b } as const;

function unsigned(n: number): number[] {
  const bytes: number[] = [];
  let rest = n;
  for (; rest >= 0x80; rest = Math.floor(rest / 0x80)) bytes.push((rest % 0x80) | 0x80);
  bytes.push(rest);
  return bytes;
}

function signed(n: number): number[] {
  const bytes: number[] = [];
  let rest = n;
  for (;;) {
    const low = rest & 0x7f;
    rest >>= 7;
    if ((rest === 0 && (low & 0x40) === 0) || (rest === -1 && (low & 0x40) !== 0)) return [...bytes, low];
    bytes.push(low | 0x80);
  }
}

const variable = (type: ValueType, index: number): Variable => ({
  type,
  get: [0x20, ...unsigned(index)],
  set: (value) => [value, 0x21, ...unsigned(index)],
  tee: (value) => [value, 0x22, ...unsigned(index)],
});

const binary =
  (...op: number[]) =>
  (a: Code, b: Code): Code => [a, b, ...op];
const load =
  (align: number, ...op: number[]) =>
  (address: Code, offset = 0): Code => [address, ...op, align, ...unsigned(offset)];
const store =
  (align: number, ...op: number[]) =>
  (address: Code, value: Code, offset = 0): Code => [address, value, ...op, align, ...unsigned(offset)];

/** Addresses and counts. */
export const i32 = {
  of: (n: number): Code => [0x41, ...signed(n)],
  add: binary(0x6a),
  sub: binary(0x6b),
  shiftLeft: (a: Code, by: number): Code => [a, i32.of(by), 0x74],
  less: binary(0x49),
  equal: binary(0x46),
  and: binary(0x71),
  load: load(2, 0x28),
};

export const f64 = {
  of: (x: number): Code => [0x44, ...new Uint8Array(Float64Array.of(x).buffer)],
  add: binary(0xa0),
  sub: binary(0xa1),
  mul: binary(0xa2),
  div: binary(0xa3),
  max: binary(0xa5),
  abs: (a: Code): Code => [a, 0x99],
  /** 1 where it holds, 0 where not, also beside what is no number. */
  less: binary(0x63),
  equal: binary(0x61),
  load: load(3, 0x2b),
  store: store(3, 0x39),
};

/** Two numbers side by side. */
export const pair = {
  load: load(3, 0xfd, 0x00),
  store: store(3, 0xfd, 0x0b),
  /** Both the same: from memory. */
  loadSame: load(3, 0xfd, 0x0a),
  same: (x: Code): Code => [x, 0xfd, 0x14],
  first: (a: Code): Code => [a, 0xfd, 0x21, 0],
  second: (a: Code): Code => [a, 0xfd, 0x21, 1],
  add: binary(0xfd, 0xf0, 0x01),
  sub: binary(0xfd, 0xf1, 0x01),
  mul: binary(0xfd, 0xf2, 0x01),
};

/** Runs the body as long as the condition, looked at before each round, holds. */
export const loopWhile = (condition: Code, ...body: Code[]): Code => [
  0x02,
  0x40,
  0x03,
  0x40, // block, loop
  condition,
  0x45,
  0x0d,
  1, // not: leave
  ...body,
  0x0c,
  0,
  0x0b,
  0x0b, // again; end, end
];

/** Runs the one or the other. */
export const either = (condition: Code, then: readonly Code[], otherwise: readonly Code[]): Code => [
  condition,
  0x04,
  0x40, // if
  ...then,
  0x05,
  ...otherwise,
  0x0b, // else, end
];

export interface Kernel<K extends string = string> {
  readonly name: K;
  readonly parameters: readonly ValueType[];
  readonly result: ValueType | undefined;
  readonly locals: readonly ValueType[];
  readonly body: Code;
}

/** Writes a function: `body` gets its parameters and makes its locals; what it leaves on the stack is the result. */
export function kernel<K extends string>(
  name: K,
  parameters: readonly ValueType[],
  result: ValueType | undefined,
  write: (p: readonly Variable[], local: (type: ValueType) => Variable) => readonly Code[],
): Kernel<K> {
  const locals: ValueType[] = [];
  const body = write(
    parameters.map((type, i) => variable(type, i)),
    (type) => variable(type, parameters.length + locals.push(type) - 1),
  );
  return { name, parameters, result, locals, body };
}

function write(code: Code, bytes: number[]): void {
  for (const part of code) {
    if (typeof part === "number") bytes.push(part);
    else write(part, bytes);
  }
}

/** A module of kernels on one memory, which it imports as `m.m`. */
export function moduleOf(kernels: readonly Kernel[]): Uint8Array<ArrayBuffer> {
  const vector = (items: readonly Code[]): Code => [...unsigned(items.length), ...items];
  const sized = (content: Code): Code => {
    const bytes: number[] = [];
    write(content, bytes);
    return [unsigned(bytes.length), bytes];
  };
  const section = (id: number, content: Code): Code => [id, sized(content)];
  const text = (s: string): number[] => [s.length, ...[...s].map((c) => c.charCodeAt(0))];
  const types = kernels.map(({ parameters, result }) => [
    0x60,
    vector(parameters.map((t) => [typeByte[t]])),
    vector(result ? [[typeByte[result]]] : []),
  ]);
  const codes = kernels.map(({ locals, body }) => sized([vector(locals.map((t) => [1, typeByte[t]])), body, 0x0b]));
  const bytes: number[] = [];
  write(
    [
      [0x00, 0x61, 0x73, 0x6d, 1, 0, 0, 0],
      section(1, vector(types)),
      section(2, vector([[text("m"), text("m"), 2, 0, 0]])),
      section(3, vector(kernels.map((_, i) => unsigned(i)))),
      section(7, vector(kernels.map(({ name }, i) => [text(name), 0, unsigned(i)]))),
      section(10, vector(codes)),
    ],
    bytes,
  );
  return Uint8Array.from(bytes);
}
