import type { Me } from "@wavekeep/api/contract";
import { QueryClient } from "@tanstack/react-query";
import { expect, test } from "vitest";
import { adoptSession, mayDo } from "./session.ts";

const person = (id: string) => ({
  id: `019363a0-0000-7000-8000-00000000000${id}`,
  name: "N",
  email: "n@lab.example",
  hasPin: false,
});
const me = (over: Partial<Me>): Me => ({
  person: person("1"),
  lab: {
    id: "019363a0-0000-7000-8000-000000000100",
    name: "Lab",
    zone: "Europe/Berlin",
    isDemo: false,
    altitudeM: null,
  },
  roles: [],
  isApprover: false,
  ownedInstrumentIds: [],
  labs: [],
  bench: null,
  idleSeconds: 1200,
  csrfToken: "t",
  isDemoServer: false,
  demoPeople: [],
  version: "0.1.0",
  ...over,
});

test("roles, owning and being a named approver each give what the table says", () => {
  const technician = me({ roles: ["technician"] });
  expect([
    mayDo(technician, "check.begin"),
    mayDo(technician, "tolerance.change"),
    mayDo(technician, "check.approve"),
  ]).toEqual([true, false, false]);
  const owner = me({ ownedInstrumentIds: ["dunlin"] });
  expect(mayDo(owner, "event.log", { instrumentId: "dunlin" })).toBe(true);
  expect(mayDo(owner, "event.log", { instrumentId: "plover" })).toBe(false);
  expect(mayDo(me({ isApprover: true }), "check.approve")).toBe(true);
});

test("who contributed to a check may not approve it, manager or not", () => {
  expect(mayDo(me({ roles: ["manager"] }), "check.approve", { contributed: true })).toBe(false);
});

test("before sign-in only what is public may be done", () => {
  const nobody = me({ person: null, lab: null });
  expect([mayDo(nobody, "session.sign-in"), mayDo(nobody, "today.read"), mayDo(nobody, "me.change")]).toEqual([
    true,
    false,
    false,
  ]);
});

test("another person at the same PC sees nothing that was fetched for the last one", () => {
  const client = new QueryClient();
  adoptSession(client, me({}));
  client.setQueryData(["today"], "secret");
  adoptSession(client, me({}));
  expect(client.getQueryData(["today"])).toBe("secret");
  adoptSession(client, me({ person: person("2") }));
  expect(client.getQueryData(["today"])).toBeUndefined();
});
