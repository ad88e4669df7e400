/** A change on the server. One change shows on many pages (a signature, a hold), so all that is shown is asked for again. */
import { useMutation, useQueryClient, type UseMutationResult } from "@tanstack/react-query";
import { useRef } from "react";

/**
 * Wraps one changing request.
 *
 * @param change  sends the request; it is given a key that stays the same until it succeeds, so that a second press or a
 *   repeat after a lost answer cannot act twice
 * @param done    called with the reply before the refresh
 */
export function useChange<Input, Reply>(
  change: (input: Input, idempotencyKey: string) => Promise<Reply>,
  done: (reply: Reply, input: Input) => void = () => undefined,
): UseMutationResult<Reply, Error, Input> {
  const client = useQueryClient();
  const key = useRef<{ value: string; input: string } | null>(null);
  return useMutation({
    mutationFn: (input: Input) => {
      const text = JSON.stringify(input) ?? "";
      if (key.current === null || key.current.input !== text) key.current = { value: crypto.randomUUID(), input: text };
      return change(input, key.current.value);
    },
    onSuccess: (reply, input) => {
      key.current = null;
      done(reply, input);
      void client.invalidateQueries();
    },
  });
}
