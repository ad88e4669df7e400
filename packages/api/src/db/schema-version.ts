/** How many migrations this server's code expects; a test compares it with the journal. */
export const MIGRATION_COUNT = 2;
