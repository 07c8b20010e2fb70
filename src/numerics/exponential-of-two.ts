/** Up to this (s h)^2 functions of s^2 are taken by their series. */
const near = 0.5;

/**
 * exp(A h) of a 2 x 2 matrix and its derivatives along directions, in closed form: with A = m + B, B^2 = s^2 (real for what flows
 * between two volumes), exp(A h) = exp(m h) (cosh(s h) + B sinh(s h) / s), which stays smooth where s is 0.
 * @param a  A, then A_1, A_2, ..., row-major; product of the off-diagonal entries of A not negative
 * @param e  the exponential and its derivatives in the same order
 */
export function exponentialOfTwo(a: Float64Array, h: number, e: Float64Array): void {
  const [b, c] = [a[1], a[2]];
  const m = (a[0] + a[3]) / 2;
  const q = (a[0] - a[3]) / 2;
  const square = q * q + b * c;
  const s = Math.sqrt(square);
  // The slow rate from the product of both, where their sum would cancel.
  const fast = m - s;
  const slow = fast < 0 ? (a[0] * a[3] - b * c) / fast : m + s;
  const [ofSlow, ofFast] = [Math.exp(slow * h), Math.exp(fast * h)];
  const cosh = (ofSlow + ofFast) / 2;
  const x = square * h * h;
  let [sinh, dSinh] = [0, 0]; // over s, and by s^2
  if (x > near) {
    sinh = (ofSlow - ofFast) / (2 * s);
    dSinh = (h * cosh - sinh) / (2 * square);
  } else {
    let term = Math.exp(m * h) * h;
    for (let k = 0; k < 12; k++) {
      sinh += term;
      term /= (2 * k + 2) * (2 * k + 3);
      dSinh += (k + 1) * term;
      term *= x;
    }
    dSinh *= h * h;
  }
  e[0] = cosh + q * sinh;
  e[1] = b * sinh;
  e[2] = c * sinh;
  e[3] = cosh - q * sinh;
  for (let p = 4; p < a.length; p += 4) {
    const [db, dc] = [a[p + 1], a[p + 2]];
    const dm = (h * (a[p] + a[p + 3])) / 2;
    const dq = (a[p] - a[p + 3]) / 2;
    const dSquare = 2 * q * dq + db * c + b * dc;
    const dCosh = (h * sinh * dSquare) / 2;
    const moved = dSinh * dSquare;
    e[p] = dm * e[0] + dCosh + moved * q + sinh * dq;
    e[p + 1] = dm * e[1] + moved * b + sinh * db;
    e[p + 2] = dm * e[2] + moved * c + sinh * dc;
    e[p + 3] = dm * e[3] + dCosh - moved * q - sinh * dq;
  }
}
