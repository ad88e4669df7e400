import { cleanup, render, screen } from "@testing-library/react";
import userEvent from "@testing-library/user-event";
import { afterEach, expect, test, vi } from "vitest";
import { BenchForm } from "./bench-form.tsx";

afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
});

test("a name and four digits by keyboard alone; a wrong PIN is emptied and said", async () => {
  const fetched = vi.fn<(url: string, init: RequestInit) => Promise<Response>>(() =>
    Promise.resolve(
      new Response(
        JSON.stringify({
          type: "/problems/wrong-credentials",
          title: "These did not match",
          status: 401,
          detail: "Name and PIN do not belong together.",
        }),
        { status: 401 },
      ),
    ),
  );
  vi.stubGlobal("fetch", fetched);
  const people = [{ id: "019363a0-0000-7000-8000-000000000002", name: "Tam Ferrule" }];
  render(<BenchForm device={{ name: "PC at bench 3", labName: "Larkmere" }} people={people} onEntered={vi.fn()} />);
  screen.getByRole("button", { name: "Tam Ferrule" }).focus();
  await userEvent.keyboard("{Enter}");
  await userEvent.keyboard("123{Enter}");
  expect(fetched).not.toHaveBeenCalled();
  await userEvent.keyboard("5{Backspace}4");
  expect(screen.getByText("4 digits")).toBeTruthy();
  await userEvent.keyboard("{Enter}");
  expect(JSON.parse(String(fetched.mock.calls[0]?.[1].body))).toEqual({ personId: people[0]?.id, pin: "1234" });
  expect(await screen.findByText(/do not belong together/)).toBeTruthy();
  expect(screen.getByText("no digit yet")).toBeTruthy();
  await userEvent.keyboard("{Escape}");
  expect(screen.getByRole("button", { name: "Tam Ferrule" })).toBeTruthy();
});
