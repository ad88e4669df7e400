/** A form that somebody overtook: both ways on wait for what stands now. */
import { QueryClient, QueryClientProvider, useQuery } from "@tanstack/react-query";
import { cleanup, render, screen, waitFor } from "@testing-library/react";
import userEvent from "@testing-library/user-event";
import { afterEach, expect, test, vi } from "vitest";
import { ApiProblem } from "../ui/index.ts";
import { Refused, useFormVersion, useKeepFromLeaving } from "./form.tsx";

afterEach(cleanup);

const stale = new ApiProblem({
  type: "/problems/stale",
  title: "Somebody changed it meanwhile",
  status: 409,
  detail: "It was changed after you opened it.",
});

function Overtaken({ read, onSend }: { read: () => Promise<number>; onSend: (version: number) => void }) {
  const { data = 1, refetch } = useQuery({ queryKey: ["thing"], queryFn: read, initialData: 1, staleTime: Infinity });
  const { version, takeCurrent } = useFormVersion(data);
  return (
    <>
      <Refused error={stale} onKeepMine={takeCurrent} onTakeTheirs={() => undefined} />
      <button type="button" onClick={() => void refetch()}>
        Ask again
      </button>
      <button type="button" onClick={() => onSend(version)}>
        Send
      </button>
    </>
  );
}

test("Keep what I typed takes the newer version, never the one that was just refused", async () => {
  let answer: (version: number) => void = () => undefined;
  const read = () => new Promise<number>((resolve) => (answer = resolve));
  const onSend = vi.fn<(version: number) => void>();
  render(
    <QueryClientProvider client={new QueryClient()}>
      <Overtaken read={read} onSend={onSend} />
    </QueryClientProvider>,
  );
  await userEvent.click(screen.getByRole("button", { name: "Ask again" }));
  const keep = await screen.findByRole<HTMLButtonElement>("button", { name: /^Keep what I typed.*working$/ });
  expect(keep.disabled).toBe(true);
  expect(screen.getByRole<HTMLButtonElement>("button", { name: /^Show what stands now/ }).disabled).toBe(true);
  answer(2);
  await waitFor(() => expect(keep.disabled).toBe(false));
  await userEvent.click(keep);
  await userEvent.click(screen.getByRole("button", { name: "Send" }));
  expect(onSend).toHaveBeenCalledExactlyOnceWith(2);
});

function Typed({ isUnsaved }: { isUnsaved: boolean }) {
  useKeepFromLeaving(isUnsaved);
  return null;
}

test("leaving asks only while something typed is not kept", () => {
  const leaves = () => window.dispatchEvent(new Event("beforeunload", { cancelable: true }));
  const { rerender } = render(<Typed isUnsaved />);
  expect(leaves()).toBe(false);
  rerender(<Typed isUnsaved={false} />);
  expect(leaves()).toBe(true);
});
