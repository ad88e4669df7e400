import { zodResolver } from "@hookform/resolvers/zod";
import { inviteInput } from "@wavekeep/api/contract";
import { useForm } from "react-hook-form";
import { api, type RouteBody } from "../shared/api.ts";
import { useChange } from "../shared/use-change.ts";
import { Button } from "../ui/button.tsx";
import { Dialog } from "../ui/dialog.tsx";
import { CheckField, Field } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { ROLES } from "./role-words.ts";

export function InviteDialog({ onClose }: { onClose: () => void }) {
  const form = useForm({ resolver: zodResolver(inviteInput), defaultValues: { email: "", roles: [] } });
  const invite = useChange(
    (input: RouteBody<"invite">, idempotencyKey) => api.post("invite", {}, input, { idempotencyKey }),
    onClose,
  );
  const { errors } = form.formState;
  const submit = form.handleSubmit((input) => invite.mutate(input));
  return (
    <Dialog
      open
      onClose={onClose}
      title="Invite a person"
      lead="A link goes to this address. It works once; whoever opens it chooses a name and a password."
      actions={
        <Button filled busy={invite.isPending} onClick={() => void submit()}>
          Send the invitation
        </Button>
      }
    >
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Field
          label="E-mail"
          type="email"
          autoComplete="off"
          autoFocus
          error={errors.email?.message}
          {...form.register("email")}
        />
        <fieldset className="mt-4">
          <legend className="type-label mb-2">Roles</legend>
          <div className="grid gap-2">
            {ROLES.map(({ role, word, note }) => (
              <CheckField key={role} label={word} note={note} value={role} {...form.register("roles")} />
            ))}
          </div>
          {errors.roles !== undefined && (
            <p role="alert" className="type-note text-out mt-2">
              {errors.roles.message}
            </p>
          )}
        </fieldset>
        <button type="submit" hidden />
        {invite.error !== null && <ProblemNote error={invite.error} className="mt-4" />}
      </form>
    </Dialog>
  );
}
