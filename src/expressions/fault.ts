/** What can be wrong with a written value, with the data that its wording needs. */
export interface FaultData {
  "bad-number": { text: string; why: string; fix: string };
  "space-before-unit": { text: string; fix: string };
  "unknown-unit": { part: string; unit: string; nearest: string | undefined };
  "bad-unit": { unit: string };
  "offset-unit": { unit: string; part: string };
  "bad-expression": { why: string; fix: string };
  "unknown-function": { name: string; nearest: string | undefined };
  "bad-uncertainty": { why: string; fix: string };
  "unlike-terms": { what: string; left: string; right: string };
  "temperature-scale": { why: string; fix: string };
  "bad-power": { why: string; fix: string };
  "ratio-wanted": { what: string; got: string };
}

export type FaultCode = keyof FaultData;

/** A fault of an expression: code, place in its text (`to` exclusive) and data. A value, never thrown. */
export type Fault = {
  readonly [C in FaultCode]: {
    readonly code: C;
    readonly from: number;
    readonly to: number;
    readonly data: FaultData[C];
  };
}[FaultCode];

/** True where there is a fault in place of a result. */
export const isFault = (x: object): x is Fault => "code" in x;
