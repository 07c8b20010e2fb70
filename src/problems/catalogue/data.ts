export const dataEntries = {} as const;
