/** A power series as a continued fraction d0 / (1 + d1 z / (1 + d2 z / (1 + ...))). */
export interface Fraction {
  readonly re: Float64Array;
  readonly im: Float64Array;
  /** Coefficients that count; fewer than asked for where the series is a fraction of a lower degree. */
  readonly used: number;
  /** True where the fraction ends by itself, so that nothing of it is left to guess. */
  readonly closed: boolean;
}

/**
 * The continued fraction that agrees with a_0 + a_1 z + ... as far as the terms go, by the quotient-difference table.
 * @param re,im   terms
 * @param first   index of a_0 in them
 * @param count   how many terms to use, odd
 * @see F.R. de Hoog, J.H. Knight, A.N. Stokes, SIAM J. Sci. Stat. Comput. 3 (1982) 357-366
 */
export function fractionOf(re: Float64Array, im: Float64Array, first: number, count: number): Fraction {
  const dRe = new Float64Array(count);
  const dIm = new Float64Array(count);
  dRe[0] = re[first];
  dIm[0] = im[first];
  const [qRe, qIm] = [new Float64Array(count), new Float64Array(count)];
  const [eRe, eIm] = [new Float64Array(count), new Float64Array(count)];
  for (let k = 0; k + 1 < count; k++) {
    const [ar, ai] = [re[first + k], im[first + k]];
    const [br, bi] = [re[first + k + 1], im[first + k + 1]];
    const size = ar * ar + ai * ai;
    qRe[k] = (br * ar + bi * ai) / size;
    qIm[k] = (bi * ar - br * ai) / size;
  }
  for (let n = 1; n < count; n++) {
    const odd = n % 2 === 1;
    dRe[n] = odd ? -qRe[0] : -eRe[0];
    dIm[n] = odd ? -qIm[0] : -eIm[0];
    // 0/0 in the table: the fraction is complete with what came before
    if (!Number.isFinite(dRe[n]) || !Number.isFinite(dIm[n])) return { re: dRe, im: dIm, used: n, closed: true };
    if (dRe[n] === 0 && dIm[n] === 0) return { re: dRe, im: dIm, used: n, closed: true };
    const left = count - 1 - n;
    if (odd) {
      for (let k = 0; k < left; k++) {
        eRe[k] = qRe[k + 1] - qRe[k] + (n > 1 ? eRe[k + 1] : 0);
        eIm[k] = qIm[k + 1] - qIm[k] + (n > 1 ? eIm[k + 1] : 0);
      }
    } else {
      for (let k = 0; k < left; k++) {
        // q(k+1) e(k+1) / e(k)
        const pr = qRe[k + 1] * eRe[k + 1] - qIm[k + 1] * eIm[k + 1];
        const pi = qRe[k + 1] * eIm[k + 1] + qIm[k + 1] * eRe[k + 1];
        const size = eRe[k] * eRe[k] + eIm[k] * eIm[k];
        qRe[k] = (pr * eRe[k] + pi * eIm[k]) / size;
        qIm[k] = (pi * eRe[k] - pr * eIm[k]) / size;
      }
    }
  }
  return { re: dRe, im: dIm, used: count, closed: false };
}

/** Real part of rotation times the fraction at z, |z| = 1; its end is guessed as one that goes on as it ended. */
export function fractionAt({ re, im, used, closed }: Fraction, zRe: number, zIm: number, rotation: Pair): number {
  let n = used - 1;
  let tRe = 1;
  let tIm = 0;
  if (!closed && n >= 2) {
    const dz = (k: number): Pair => ({ re: re[k] * zRe - im[k] * zIm, im: re[k] * zIm + im[k] * zRe });
    const last = dz(n);
    const before = dz(n - 1);
    const hRe = (1 + before.re - last.re) / 2;
    const hIm = (before.im - last.im) / 2;
    const rest = remainder(hRe, hIm, last);
    tRe += rest.re;
    tIm += rest.im;
    n--;
  }
  for (; n >= 1; n--) {
    const pr = re[n] * zRe - im[n] * zIm;
    const pi = re[n] * zIm + im[n] * zRe;
    const size = Math.max(tRe * tRe + tIm * tIm, 1e-280);
    const nextRe = 1 + (pr * tRe + pi * tIm) / size;
    tIm = (pi * tRe - pr * tIm) / size;
    tRe = nextRe;
  }
  const size = Math.max(tRe * tRe + tIm * tIm, 1e-280);
  const vRe = (re[0] * tRe + im[0] * tIm) / size;
  const vIm = (im[0] * tRe - re[0] * tIm) / size;
  return rotation.re * vRe - rotation.im * vIm;
}

interface Pair {
  readonly re: number;
  readonly im: number;
}

/** h (sqrt(1 + d/h^2) - 1). */
function remainder(hRe: number, hIm: number, d: Pair): Pair {
  const sRe = hRe * hRe - hIm * hIm;
  const sIm = 2 * hRe * hIm;
  const size = sRe * sRe + sIm * sIm;
  if (!(size > 1e-280)) return d;
  const uRe = 1 + (d.re * sRe + d.im * sIm) / size;
  const uIm = (d.im * sRe - d.re * sIm) / size;
  const length = Math.hypot(uRe, uIm);
  const rootRe = Math.sqrt(Math.max(0, (length + uRe) / 2)) - 1;
  const rootIm = Math.sign(uIm) * Math.sqrt(Math.max(0, (length - uRe) / 2));
  return { re: hRe * rootRe - hIm * rootIm, im: hRe * rootIm + hIm * rootRe };
}
