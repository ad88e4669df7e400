import { afterEach, beforeEach, expect, test, vi } from "vitest";
import type { Me } from "@wavekeep/api/contract";
import { api, keepCsrfToken, onSessionLost, routeUrl } from "./api.ts";
import { ApiProblem } from "./problem.ts";

const me = (over: Partial<Me> = {}): Me => ({
  person: { id: "019363a0-0000-7000-8000-000000000001", name: "Ida Vernier", email: "ida@lab.example", hasPin: false },
  lab: null,
  roles: [],
  isApprover: false,
  ownedInstrumentIds: [],
  labs: [],
  bench: null,
  idleSeconds: 1200,
  csrfToken: "first",
  isDemoServer: false,
  demoPeople: [],
  version: "0.1.0",
  ...over,
});
const reply = (status: number, body: unknown) =>
  new Response(body === null ? null : JSON.stringify(body), {
    status,
    headers: { "content-type": "application/json" },
  });
const problem = (kind: string, status: number) =>
  reply(status, { type: `/problems/${kind}`, title: kind, status, detail: "Said plainly." });

const fetched = vi.fn<(url: string, init: RequestInit) => Promise<Response>>();
beforeEach(() => {
  vi.stubGlobal("fetch", fetched);
  keepCsrfToken(me());
});
afterEach(() => {
  fetched.mockReset();
  vi.unstubAllGlobals();
  onSessionLost(() => undefined);
});
const tokenOf = (call: number) => (fetched.mock.calls[call]?.[1].headers as Record<string, string>)["x-csrf-token"];

test("parameters are escaped and empty query values left away", () => {
  expect(routeUrl("readCheck", { checkId: "a/b" })).toBe("/api/checks/a%2Fb");
  expect(routeUrl("listChecks", {}, { q: "", state: undefined, limit: 20 })).toBe("/api/checks?limit=20");
  expect(() => routeUrl("readCheck", {})).toThrow("needs checkId");
});

test("a refusal is thrown as the server's own words", async () => {
  fetched.mockResolvedValueOnce(problem("stale-version", 409));
  const error = await api.put("changeMe", {}, { name: "Ida" }).catch((thrown: unknown) => thrown);
  expect(error).toBeInstanceOf(ApiProblem);
  expect((error as ApiProblem).kind).toBe("stale-version");
  expect((error as ApiProblem).message).toBe("Said plainly.");
});

test("an answer that is no problem document, and no answer at all, are said as such", async () => {
  fetched.mockResolvedValueOnce(new Response("<html>", { status: 502 }));
  await expect(api.get("listPeople")).rejects.toMatchObject({ kind: "no-answer", status: 502 });
  fetched.mockRejectedValueOnce(new TypeError("failed"));
  await expect(api.get("listPeople")).rejects.toMatchObject({ kind: "unreachable" });
});

test("a reply that is not what the contract says is refused, not shown", async () => {
  fetched.mockResolvedValueOnce(reply(200, { people: "none" }));
  await expect(api.get("listPeople")).rejects.toMatchObject({ kind: "unreadable-reply" });
});

test("an old token of the same person is renewed and the request sent once more", async () => {
  fetched
    .mockResolvedValueOnce(problem("csrf", 403))
    .mockResolvedValueOnce(reply(200, me({ csrfToken: "second" })))
    .mockResolvedValueOnce(reply(204, null));
  await api.put("changeMe", {}, { name: "Ida" });
  expect(fetched).toHaveBeenCalledTimes(3);
  expect([tokenOf(0), tokenOf(2)]).toEqual(["first", "second"]);
});

test("nothing is sent again when the session now belongs to another person, or to nobody", async () => {
  for (const now of [
    me({ csrfToken: "other", person: { ...me().person!, id: "019363a0-0000-7000-8000-000000000002" } }),
    me({ csrfToken: "none", person: null }),
  ]) {
    keepCsrfToken(me());
    const lost = vi.fn();
    onSessionLost(lost);
    fetched.mockReset();
    fetched.mockResolvedValueOnce(problem("csrf", 403)).mockResolvedValueOnce(reply(200, now));
    await expect(api.put("changeMe", {}, { name: "Ida" })).rejects.toMatchObject({ kind: "csrf" });
    expect(fetched).toHaveBeenCalledTimes(2);
    expect(lost).toHaveBeenCalledWith(expect.anything(), now);
  }
});

test("a session that ended is told to the shell; a wrong password is not taken for one", async () => {
  const lost = vi.fn();
  onSessionLost(lost);
  fetched.mockResolvedValueOnce(problem("wrong-password", 403));
  await expect(api.put("changePin", {}, { current: "x", pin: "1234" })).rejects.toBeInstanceOf(ApiProblem);
  fetched.mockResolvedValueOnce(problem("wrong-credentials", 401));
  await expect(api.post("signIn", {}, { email: "a@b.example", password: "x" })).rejects.toBeInstanceOf(ApiProblem);
  expect(lost).not.toHaveBeenCalled();
  fetched.mockResolvedValueOnce(problem("session-ended", 401));
  await expect(api.get("listPeople")).rejects.toBeInstanceOf(ApiProblem);
  expect(lost).toHaveBeenCalledOnce();
});
