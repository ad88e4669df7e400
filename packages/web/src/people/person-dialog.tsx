/** One person: roles and approver, or the end of the membership with its consequence in words. */
import type { Person, Role } from "@wavekeep/api/contract";
import { useState } from "react";
import { api } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";
import { Button, TextButton } from "../ui/button.tsx";
import { Dialog } from "../ui/dialog.tsx";
import { CheckField, TextArea } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { ROLES } from "./role-words.ts";

export function PersonDialog({ person, onClose }: { person: Person; onClose: () => void }) {
  const [roles, setRoles] = useState<readonly Role[]>(person.roles);
  const [isApprover, setApprover] = useState(person.isApprover);
  const [isEnding, setEnding] = useState(false);
  const [reason, setReason] = useState("");
  const change = useChange(
    (_: null, _key) =>
      api.put("changeRoles", { personId: person.id }, { roles: [...roles], isApprover, version: person.version }),
    onClose,
  );
  const end = useChange(
    (_: null, idempotencyKey) =>
      api.post(
        "endMembership",
        { personId: person.id },
        { reason: reason.trim(), version: person.version },
        { idempotencyKey },
      ),
    onClose,
  );
  if (isEnding) {
    return (
      <Dialog
        open
        onClose={onClose}
        title={`End the membership of ${person.name}`}
        lead={`${person.name} is signed out of this lab at once and can no longer open it. Everything made and signed stays, under the name it was signed with.${person.owns.length > 0 ? ` Still owned: ${person.owns.map((owned) => owned.name).join(", ")}. Give these another owner.` : ""}`}
        actions={
          <Button filled busy={end.isPending} disabled={reason.trim().length < 3} onClick={() => end.mutate(null)}>
            End the membership
          </Button>
        }
      >
        <TextArea
          label="Reason, kept in the trail"
          value={reason}
          autoFocus
          onChange={(event) => setReason(event.target.value)}
        />
        {end.error !== null && <ProblemNote error={end.error} className="mt-4" />}
      </Dialog>
    );
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={person.name}
      lead={person.email}
      actions={
        <>
          <Button filled busy={change.isPending} onClick={() => change.mutate(null)}>
            Keep these roles
          </Button>
          <TextButton className="order-last ml-auto" onClick={() => setEnding(true)}>
            End membership
          </TextButton>
        </>
      }
    >
      <fieldset className="grid gap-2">
        <legend className="type-label mb-2">Roles</legend>
        {ROLES.map(({ role, word, note }) => (
          <CheckField
            key={role}
            label={word}
            note={note}
            checked={roles.includes(role)}
            onChange={(event) =>
              setRoles(event.target.checked ? [...roles, role] : roles.filter((kept) => kept !== role))
            }
          />
        ))}
        <CheckField
          label="named approver"
          note="May review and approve checks of others without being a manager."
          checked={isApprover}
          onChange={(event) => setApprover(event.target.checked)}
        />
      </fieldset>
      {change.error !== null && <ProblemNote error={change.error} className="mt-4" />}
    </Dialog>
  );
}
