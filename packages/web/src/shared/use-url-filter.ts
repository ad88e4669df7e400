/** Filters kept in the address, so that back works and a list can be sent as a link. */
import { useCallback } from "react";
import { useSearchParams } from "react-router";

type Values<Name extends string> = Partial<Record<Name, string | null>>;

/**
 * @param names  the parameters that this list knows; others are left alone
 * @returns what is set now; a setter of one; one that forgets all; a setter of several at once. Setting replaces the
 *   entry of the history, and an empty value removes the filter.
 */
export function useUrlFilter<Name extends string>(
  names: readonly Name[],
): [
  Partial<Record<Name, string>>,
  (name: Name, value: string | null) => void,
  () => void,
  (values: Values<Name>) => void,
] {
  const [search, setSearch] = useSearchParams();
  const filter: Partial<Record<Name, string>> = {};
  for (const name of names) {
    const value = search.get(name);
    if (value !== null && value !== "") filter[name] = value;
  }
  const setMany = useCallback(
    (values: Values<Name>) =>
      setSearch(
        (before) => {
          const next = new URLSearchParams(before);
          for (const [name, value] of Object.entries(values) as [Name, string | null][]) {
            if (value === null || value === "") next.delete(name);
            else next.set(name, value);
          }
          return next;
        },
        { replace: true, preventScrollReset: true },
      ),
    [setSearch],
  );
  const set = useCallback((name: Name, value: string | null) => setMany({ [name]: value } as Values<Name>), [setMany]);
  const clear = useCallback(() => setSearch({}, { replace: true, preventScrollReset: true }), [setSearch]);
  return [filter, set, clear, setMany];
}
