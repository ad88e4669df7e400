/** What a change changes: for the trail's before and after. */

/** The keys of `next` whose values differ, as they were and as they are. */
export function changedOnly(
  stored: Record<string, unknown>,
  next: Record<string, unknown>,
): { before: Record<string, unknown>; after: Record<string, unknown> } {
  const before: Record<string, unknown> = {};
  const after: Record<string, unknown> = {};
  for (const [key, value] of Object.entries(next)) {
    if (JSON.stringify(stored[key] ?? null) === JSON.stringify(value ?? null)) continue;
    before[key] = stored[key] ?? null;
    after[key] = value ?? null;
  }
  return { before, after };
}
