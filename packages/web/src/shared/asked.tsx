/** What was asked of the server, in its four designed states: loading, failed, refused, here. */
import type { UseInfiniteQueryResult, UseQueryResult } from "@tanstack/react-query";
import type { ReactNode } from "react";
import { Button, ProblemNote, Skeleton } from "../ui/index.ts";

interface AskedProps<Data> {
  query: Pick<UseQueryResult<Data>, "data" | "error" | "isFetching" | "refetch">;
  /** Skeleton rows while nothing is known yet. */
  rows?: number;
  children: (data: Data) => ReactNode;
}

/** Shows the data as soon as there is any; what was seen last stays while it refreshes, and a failure is said above it. */
export function Asked<Data>({ query, rows = 5, children }: AskedProps<Data>) {
  return (
    <>
      {query.error !== null && (
        <div className="mb-4">
          <ProblemNote error={query.error} />
          <Button className="mt-3" busy={query.isFetching} onClick={() => void query.refetch()}>
            Try again
          </Button>
        </div>
      )}
      {query.data === undefined ? query.error === null && <Skeleton rows={rows} /> : children(query.data)}
    </>
  );
}

/** The button under a keyset-paged list. */
export function Older({
  query,
  label = "Show older",
}: {
  query: Pick<UseInfiniteQueryResult, "hasNextPage" | "isFetchingNextPage" | "fetchNextPage">;
  label?: string;
}) {
  if (!query.hasNextPage) return null;
  return (
    <Button className="mt-4" busy={query.isFetchingNextPage} onClick={() => void query.fetchNextPage()}>
      {label}
    </Button>
  );
}
