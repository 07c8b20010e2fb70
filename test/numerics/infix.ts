/** A tiny evaluator of the infix strings in the reference files: + - * / ^, unary minus, brackets, exp, cos, sin, atan, pi, names. */
export type Formula = (names: Readonly<Record<string, number>>) => number;

const functions: Readonly<Record<string, (x: number) => number>> = {
  exp: Math.exp,
  cos: Math.cos,
  sin: Math.sin,
  atan: Math.atan,
};

export function formula(text: string): Formula {
  const tokens = text.match(/\d+\.?\d*(?:[eE][-+]?\d+)?|[A-Za-z]\w*|[-+*/^()]/g) ?? [];
  let at = 0;
  const sum = (): Formula => {
    let left = product();
    while (tokens[at] === "+" || tokens[at] === "-") {
      const [a, sign, b] = [left, tokens[at++] === "+" ? 1 : -1, product()];
      left = (x) => a(x) + sign * b(x);
    }
    return left;
  };
  const product = (): Formula => {
    let left = signed();
    while (tokens[at] === "*" || tokens[at] === "/") {
      const times = tokens[at++] === "*";
      const [a, b] = [left, signed()];
      left = times ? (x) => a(x) * b(x) : (x) => a(x) / b(x);
    }
    return left;
  };
  const signed = (): Formula => {
    if (tokens[at] !== "-") return power();
    at++;
    const a = signed();
    return (x) => -a(x);
  };
  const power = (): Formula => {
    const base = atom();
    if (tokens[at] !== "^") return base;
    at++;
    const exponent = signed();
    return (x) => base(x) ** exponent(x);
  };
  const atom = (): Formula => {
    const token = tokens[at++];
    if (token === undefined) throw new Error(`formula ends early: ${text}`);
    if (token === "(") {
      const inner = sum();
      at++;
      return inner;
    }
    if (/^\d/.test(token)) {
      const value = Number(token);
      return () => value;
    }
    const known = functions[token];
    if (known) {
      const argument = atom();
      return (x) => known(argument(x));
    }
    if (token === "pi") return () => Math.PI;
    return (x) => x[token];
  };
  const whole = sum();
  if (at !== tokens.length) throw new Error(`cannot read ${tokens.slice(at).join(" ")} in ${text}`);
  return whole;
}
