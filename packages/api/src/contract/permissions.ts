/**
 * Who may do what: one table that the API enforces and the web reads to hide what would be refused.
 *
 * Any of the `roles`, or the `relation`, allows; `unless` refuses both. `public`: before sign-in. `member`: any member of the lab.
 */
import type { Role } from "./common.ts";

export type Relation = "owns-instrument" | "named-approver" | "own-draft";
export interface Permission {
  public?: true;
  /** Signed in, any lab or none. */
  signedIn?: true;
  /** Any member of the current lab, whatever the roles (an owner may have none). */
  member?: true;
  roles?: readonly Role[];
  relation?: Relation;
  unless?: "contributed-to-check";
}

export const permissions = {
  "health.read": { public: true },
  "session.read": { public: true },
  "session.sign-in": { public: true },
  "session.sign-out": { signedIn: true },
  "session.sign-out-everywhere": { signedIn: true },
  "session.switch-lab": { signedIn: true },
  "password.forget": { public: true },
  "password.reset": { public: true },
  "invitation.read": { public: true },
  "invitation.accept": { public: true },
  "bench.read": { public: true },
  "bench.sign-in": { public: true },
  "bench.lock": { signedIn: true },
  "me.change": { signedIn: true },
  "bench.enrol": { roles: ["manager"] },
  "people.read": { member: true },
  "people.invite": { roles: ["manager"] },
  "people.change": { roles: ["manager"] },
  "lab.read": { member: true },
  "lab.change": { roles: ["manager"] },
  "today.read": { member: true },
  "search.read": { member: true },
  "instrument.read": { member: true },
  "instrument.change": { roles: ["manager"] },
  "tolerance.change": { roles: ["manager"] },
  "standing.change": { roles: ["manager"] },
  "due.change": { roles: ["manager"] },
  "axis.change": { roles: ["manager"] },
  "event.log": { roles: ["technician", "manager"], relation: "owns-instrument" },
  "source.read": { member: true },
  "source.change": { roles: ["manager"] },
  "linelist.read": { member: true },
  "procedure.read": { member: true },
  "check.read": { member: true },
  "check.begin": { roles: ["technician", "manager"] },
  "check.edit": { roles: ["technician", "manager"] },
  "capture.add": { roles: ["technician", "manager"] },
  "capture.read": { member: true },
  "check.submit": { roles: ["technician", "manager"] },
  "check.return": { roles: ["manager"], relation: "named-approver" },
  "check.approve": { roles: ["manager"], relation: "named-approver", unless: "contributed-to-check" },
  "check.acknowledge": { roles: ["manager"], relation: "owns-instrument" },
  "report.read": { member: true },
  "alert.read": { member: true },
  "alert.acknowledge": { roles: ["manager"], relation: "owns-instrument" },
  "impact.read": { member: true },
  "impact.decide": { roles: ["manager"], relation: "owns-instrument" },
  "records.read": { roles: ["manager", "technician", "auditor"], relation: "owns-instrument" },
  "openapi.read": { public: true },
  "mail-catcher.read": { public: true },
} as const satisfies Record<string, Permission>;

export type Action = keyof typeof permissions;
