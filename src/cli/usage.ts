/** The command line is wrong, or asks for what cannot be done here: exit status 2. */
export class UsageError extends Error {}
