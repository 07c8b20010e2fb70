export const chemistryEntries = {} as const;
