/** Filters kept in the address, so that back works and a list can be sent as a link. */
import { useCallback } from "react";
import { useSearchParams } from "react-router";

/**
 * @param names  the parameters that this list knows; others are left alone
 * @returns what is set now, and a setter that replaces the history entry (an empty value removes the filter)
 */
export function useUrlFilter<Name extends string>(names: readonly Name[]): [Partial<Record<Name, string>>, (name: Name, value: string | null) => void, () => void] {
  const [search, setSearch] = useSearchParams();
  const filter: Partial<Record<Name, string>> = {};
  for (const name of names) {
    const value = search.get(name);
    if (value !== null && value !== "") filter[name] = value;
  }
  const set = useCallback(
    (name: Name, value: string | null) =>
      setSearch(
        (before) => {
          const next = new URLSearchParams(before);
          if (value === null || value === "") next.delete(name);
          else next.set(name, value);
          return next;
        },
        { replace: true, preventScrollReset: true },
      ),
    [setSearch],
  );
  const clear = useCallback(() => setSearch({}, { replace: true, preventScrollReset: true }), [setSearch]);
  return [filter, set, clear];
}
