/** People, invitations, shared PCs. Everybody may look; managers change. */
import { useQuery } from "@tanstack/react-query";
import type { Person } from "@wavekeep/api/contract";
import { useState } from "react";
import { api, type RouteReply } from "../shared/api.ts";
import { useMay } from "../shared/session.ts";
import { useChange } from "../shared/use-change.ts";
import { Button, TextButton } from "../ui/button.tsx";
import { formatDate } from "../ui/format.ts";
import { Section } from "../ui/page.tsx";
import { Empty, Skeleton, TimeAgo, When } from "../ui/parts.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Table } from "../ui/table.tsx";
import { DeputyDialog } from "./deputy-dialog.tsx";
import { InviteDialog } from "./invite-dialog.tsx";
import { PersonDialog } from "./person-dialog.tsx";
import { peopleQuery } from "./queries.ts";
import { rolesText } from "./role-words.ts";

type People = RouteReply<"listPeople">;

export function PeopleTab() {
  const { data, error } = useQuery(peopleQuery);
  const may = useMay();
  const [dialog, setDialog] = useState<"invite" | "deputy" | null>(null);
  const [person, setPerson] = useState<Person | null>(null);
  const mayChange = may("people.change");
  return (
    <>
      <Section
        plain
        title="People"
        note="Roles say what one may do; owning an instrument gives its own rights."
        links={mayChange && <TextButton onClick={() => setDialog("deputy")}>Appoint a deputy</TextButton>}
      >
        {error !== null && <ProblemNote error={error} className="mb-4" />}
        {data === undefined ? (
          error === null && <Skeleton />
        ) : (
          <PeopleTable people={data.people} onOpen={mayChange ? setPerson : undefined} />
        )}
        {may("people.invite") && (
          <Button filled className="mt-5" onClick={() => setDialog("invite")}>
            Invite a person
          </Button>
        )}
      </Section>
      {data !== undefined && may("people.invite") && (
        <Invitations invitations={data.invitations.filter((invitation) => invitation.state !== "accepted")} />
      )}
      {data !== undefined && <BenchDevices devices={data.benchDevices} />}
      {dialog === "invite" && <InviteDialog onClose={() => setDialog(null)} />}
      {dialog === "deputy" && data !== undefined && (
        <DeputyDialog people={data.people} onClose={() => setDialog(null)} />
      )}
      {person !== null && <PersonDialog person={person} onClose={() => setPerson(null)} />}
    </>
  );
}

function PeopleTable({ people, onOpen }: { people: readonly Person[]; onOpen?: (person: Person) => void }) {
  const rolesOf = (person: Person) => (
    <>
      {rolesText(person.roles, person.owns.length > 0)}
      {person.isApprover && <span className="type-note"> · named approver</span>}
    </>
  );
  const standsInFor = (person: Person) =>
    person.deputyFor
      .map((deputy) => `for ${deputy.person.name}, ${formatDate(deputy.fromOn)} to ${formatDate(deputy.toOn)}`)
      .join("; ");
  const nameOf = (person: Person) =>
    onOpen === undefined || person.endedAt !== null ? (
      <span className={person.endedAt === null ? "strong" : "left-out"}>{person.name}</span>
    ) : (
      <TextButton className="strong" onClick={() => onOpen(person)}>
        {person.name}
      </TextButton>
    );
  return (
    <Table
      caption="People of the lab"
      rows={people}
      rowKey={(person) => person.id}
      columns={[
        { key: "name", head: "Name", cell: nameOf },
        { key: "roles", head: "Roles", cell: rolesOf },
        { key: "owns", head: "Owns", cell: (person) => person.owns.map((owned) => owned.name).join(", ") || "–" },
        { key: "deputy", head: "Deputy", cell: (person) => standsInFor(person) || "–" },
        { key: "email", head: "E-mail", cell: (person) => person.email },
        { key: "seen", head: "Last seen", className: "whitespace-nowrap", cell: lastSeen },
      ]}
      narrow={(person) => (
        <>
          <div className="flex items-baseline justify-between gap-4">
            {nameOf(person)}
            <span>{lastSeen(person)}</span>
          </div>
          <div className="type-note">
            {rolesOf(person)}
            {person.owns.length > 0 && ` · owns ${person.owns.map((owned) => owned.name).join(", ")}`}
          </div>
          <div className="type-note">
            {person.email}
            {person.deputyFor.length > 0 && ` · deputy ${standsInFor(person)}`}
          </div>
        </>
      )}
    />
  );
}

function lastSeen(person: Person) {
  if (person.endedAt !== null) {
    return (
      <span className="left-out">
        left <When at={person.endedAt} as="short" />
      </span>
    );
  }
  return person.lastSeenAt === null ? "not yet" : <TimeAgo at={person.lastSeenAt} />;
}

function Invitations({ invitations }: { invitations: People["invitations"] }) {
  const withdraw = useChange((invitationId: string) => api.delete("withdrawInvitation", { invitationId }));
  if (invitations.length === 0) return null;
  return (
    <Section title="Invitations" note="A link by mail, good for one person and a few days.">
      {withdraw.error !== null && <ProblemNote error={withdraw.error} className="mb-4" />}
      <Table
        caption="Invitations"
        rows={invitations}
        rowKey={(invitation) => invitation.id}
        columns={[
          { key: "email", head: "E-mail", cell: (invitation) => invitation.email },
          { key: "roles", head: "Roles", cell: (invitation) => rolesText(invitation.roles, false) },
          { key: "by", head: "Invited", cell: (invitation) => invitedBy(invitation) },
          { key: "state", head: "State", cell: (invitation) => stateOf(invitation) },
          {
            key: "act",
            head: <span className="sr-only">Actions</span>,
            className: "text-right",
            cell: (invitation) =>
              invitation.state === "open" && (
                <TextButton onClick={() => withdraw.mutate(invitation.id)}>Withdraw</TextButton>
              ),
          },
        ]}
        narrow={(invitation) => (
          <>
            <div className="flex items-baseline justify-between gap-4">
              <span className="min-w-0 break-all">{invitation.email}</span>
              {invitation.state === "open" && (
                <TextButton onClick={() => withdraw.mutate(invitation.id)}>Withdraw</TextButton>
              )}
            </div>
            <div className="type-note">
              {rolesText(invitation.roles, false)} · {stateOf(invitation)}
            </div>
          </>
        )}
      />
    </Section>
  );
}

type Invitation = People["invitations"][number];
const invitedBy = (invitation: Invitation) => (
  <>
    {invitation.invitedBy.name}, <When at={invitation.invitedAt} as="day" />
  </>
);
const stateOf = (invitation: Invitation) =>
  invitation.state === "open" ? (
    <>
      open until <When at={invitation.expiresAt} as="short" />
    </>
  ) : (
    <span className="text-quiet">{invitation.state}</span>
  );

function BenchDevices({ devices }: { devices: People["benchDevices"] }) {
  const may = useMay();
  const remove = useChange((deviceId: string) => api.delete("removeBench", { deviceId }));
  const enrol = useChange((name: string) => api.post("enrolBench", {}, { name }));
  const [name, setName] = useState("");
  const [isNaming, setNaming] = useState(false);
  const mayEnrol = may("bench.enrol");
  if (!mayEnrol && devices.length === 0) return null;
  return (
    <Section title="Shared PCs" note="On these, people change by name and PIN; signing still asks for the password.">
      {(remove.error ?? enrol.error) !== null && <ProblemNote error={remove.error ?? enrol.error} className="mb-4" />}
      {devices.length === 0 ? (
        <Empty text="No PC is shared yet. Enrol the one you are sitting at: it stays known by a cookie, and nobody needs a shared account." />
      ) : (
        <Table
          caption="Shared PCs"
          rows={devices}
          rowKey={(device) => device.id}
          columns={[
            { key: "name", head: "Name", cell: (device) => <span className="strong">{device.name}</span> },
            {
              key: "enrolled",
              head: "Enrolled",
              cell: (device) => (
                <>
                  {device.enrolledBy.name}, <When at={device.enrolledAt} as="day" />
                </>
              ),
            },
            {
              key: "used",
              head: "Last used",
              cell: (device) => (device.lastUsedAt === null ? "not yet" : <TimeAgo at={device.lastUsedAt} />),
            },
            {
              key: "act",
              head: <span className="sr-only">Actions</span>,
              className: "text-right",
              cell: (device) =>
                mayEnrol && <TextButton onClick={() => remove.mutate(device.id)}>End bench mode</TextButton>,
            },
          ]}
        />
      )}
      {mayEnrol &&
        (isNaming ? (
          <form
            className="mt-5 flex flex-wrap items-end gap-3"
            onSubmit={(event) => {
              event.preventDefault();
              if (name.trim() !== "") enrol.mutate(name.trim(), { onSuccess: () => setNaming(false) });
            }}
          >
            <label className="type-label">
              Name of this PC
              <span className="field-box mt-1 w-[260px]">
                <input autoFocus value={name} maxLength={120} onChange={(event) => setName(event.target.value)} />
              </span>
            </label>
            <Button type="submit" busy={enrol.isPending} disabled={name.trim() === ""}>
              Enrol this PC
            </Button>
            <Button onClick={() => setNaming(false)}>Cancel</Button>
          </form>
        ) : (
          <Button className="mt-5" onClick={() => setNaming(true)}>
            Enrol this PC
          </Button>
        ))}
    </Section>
  );
}
