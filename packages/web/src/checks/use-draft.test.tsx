import type { Check, DraftInput } from "@wavekeep/api/contract";
import { QueryClient, QueryClientProvider } from "@tanstack/react-query";
import { act, cleanup, renderHook, waitFor } from "@testing-library/react";
import type { ReactNode } from "react";
import { afterEach, beforeEach, expect, test, vi } from "vitest";
import { useDraft } from "./use-draft.ts";

const checkId = "0190a000-0000-7000-8000-000000000001";
const draft: DraftInput = {
  sourceIds: [],
  minutesSinceSwitchOn: null,
  temperatureC: null,
  pressureHpa: null,
  relativeHumidity: null,
  fullScaleCounts: null,
  mode: "earlier-axis",
  rangeFirstNm: null,
  rangeLastNm: null,
  leftOut: [],
  note: "",
  version: 3,
};
const checkWith = (inputs: Partial<DraftInput>): Check =>
  ({ summary: { id: checkId }, draft: { ...draft, ...inputs }, attempts: [], currentAttempt: 1 }) as unknown as Check;

const { saveDraft, readCheck, analyse } = vi.hoisted(() => ({
  saveDraft: vi.fn(),
  readCheck: vi.fn(),
  analyse: vi.fn(),
}));
vi.mock("./queries.ts", async () => {
  const keep = () => undefined;
  return { saveDraft, readCheck, analyse, useKeepCheck: () => keep };
});

const wrapper = ({ children }: { children: ReactNode }) => (
  <QueryClientProvider client={new QueryClient()}>{children}</QueryClientProvider>
);
const stale = async () => {
  const { ApiProblem } = await import("../shared/problem.ts");
  return new ApiProblem({
    type: "/problems/stale",
    title: "Changed in the meantime",
    status: 409,
    detail: "Alix Dowel changed it.",
  });
};

beforeEach(() => {
  localStorage.clear();
  vi.useFakeTimers({ shouldAdvanceTime: true });
});
afterEach(() => {
  cleanup();
  vi.useRealTimers();
  vi.resetAllMocks();
});

test("what is typed is kept on this device at once and on the server when the hand rests, in one request", async () => {
  saveDraft.mockImplementation(async (_id: string, body: DraftInput) =>
    checkWith({ ...body, version: body.version + 1 }),
  );
  const { result } = renderHook(() => useDraft(checkWith({})), { wrapper });
  act(() => result.current.change({ note: "l" }));
  act(() => result.current.change({ note: "lamp warm" }));
  expect(localStorage.getItem(`wavekeep.draft.${checkId}`)).toContain("lamp warm");
  expect(saveDraft).not.toHaveBeenCalled();
  await act(async () => vi.advanceTimersByTimeAsync(1000));
  expect(saveDraft).toHaveBeenCalledTimes(1);
  expect(saveDraft.mock.calls[0]?.[1]).toMatchObject({ note: "lamp warm", version: 3 });
  await waitFor(() => expect(result.current.isUnsaved).toBe(false));
  expect(localStorage.getItem(`wavekeep.draft.${checkId}`)).toBeNull();
});

test("a stale form keeps what was typed and sends it over the newer copy only when asked", async () => {
  saveDraft.mockRejectedValueOnce(await stale());
  const { result } = renderHook(() => useDraft(checkWith({})), { wrapper });
  act(() => result.current.change({ note: "mine" }));
  await act(async () => vi.advanceTimersByTimeAsync(1000));
  expect(result.current.saveError).not.toBeNull();
  expect(result.current.draft.note).toBe("mine");
  readCheck.mockResolvedValue(checkWith({ note: "theirs", version: 8 }));
  saveDraft.mockImplementation(async (_id: string, body: DraftInput) =>
    checkWith({ ...body, version: body.version + 1 }),
  );
  await act(async () => {
    result.current.keepMine();
    await vi.advanceTimersByTimeAsync(50);
  });
  expect(saveDraft).toHaveBeenLastCalledWith(checkId, expect.objectContaining({ note: "mine", version: 8 }));
});

test("a leave-out that the server refuses is taken back, and its refusal thrown", async () => {
  const { ApiProblem } = await import("../shared/problem.ts");
  const refusal = new ApiProblem({
    type: "/problems/unusable",
    title: "Not usable",
    status: 422,
    detail: "No other line stands within 3 widths of it.",
  });
  saveDraft.mockRejectedValueOnce(refusal);
  const { result } = renderHook(() => useDraft(checkWith({})), { wrapper });
  await act(async () => {
    await expect(
      result.current.apply({ leftOut: [{ wavelengthNm: 546.075, reason: "blended", note: "in its wing" }] }),
    ).rejects.toBe(refusal);
  });
  expect(result.current.draft.leftOut).toEqual([]);
});

test("a draft that this device kept while the server was away is there again, and sent", async () => {
  localStorage.setItem(
    `wavekeep.draft.${checkId}`,
    JSON.stringify({ version: 3, values: { note: "typed before the crash" } }),
  );
  saveDraft.mockImplementation(async (_id: string, body: DraftInput) =>
    checkWith({ ...body, version: body.version + 1 }),
  );
  const { result } = renderHook(() => useDraft(checkWith({})), { wrapper });
  expect(result.current.draft.note).toBe("typed before the crash");
  await act(async () => vi.advanceTimersByTimeAsync(1000));
  expect(saveDraft).toHaveBeenCalledTimes(1);
});

test("a number that cannot be read is not sent as one", async () => {
  saveDraft.mockImplementation(async (_id: string, body: DraftInput) =>
    checkWith({ ...body, version: body.version + 1 }),
  );
  const { result } = renderHook(() => useDraft(checkWith({})), { wrapper });
  act(() => result.current.change({ temperatureC: Number.NaN }));
  await act(async () => vi.advanceTimersByTimeAsync(1000));
  expect(saveDraft.mock.calls[0]?.[1]).toMatchObject({ temperatureC: null });
});
