import type { DocumentKind, Shape } from "./shape.js";

/** One fault as the validator found it; paths are JSON Pointers. */
export interface Fault {
  readonly instancePath: string;
  readonly schemaPath: string;
  readonly keyword: string;
  readonly params: Readonly<Record<string, unknown>>;
}

/** True where the value has the shape; else its `errors` hold the faults until the next call. */
export interface Validator {
  (value: unknown): boolean;
  errors?: readonly Fault[] | null;
}

/** Written by the build from the declarations in `documents/`: each document's shape and its compiled validator. */
export const documents: Readonly<Record<DocumentKind, { readonly shape: Shape; readonly validate: Validator }>>;
