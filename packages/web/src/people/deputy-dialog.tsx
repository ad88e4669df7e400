import { zodResolver } from "@hookform/resolvers/zod";
import { appointDeputyInput, type Person } from "@wavekeep/api/contract";
import { useForm } from "react-hook-form";
import { api, type RouteBody } from "../shared/api.ts";
import { useToday } from "../shared/session.ts";
import { useChange } from "../shared/use-change.ts";
import { Button } from "../ui/button.tsx";
import { Dialog } from "../ui/dialog.tsx";
import { DateField, SelectField } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";

/** Somebody stands in for a manager or an owner, from one date to another. */
export function DeputyDialog({ people, onClose }: { people: readonly Person[]; onClose: () => void }) {
  const todayOn = useToday();
  const form = useForm({
    resolver: zodResolver(
      appointDeputyInput
        .refine((input) => input.fromOn <= input.toOn, { path: ["toOn"], message: "It ends before it begins." })
        .refine((input) => input.personId !== input.forPersonId, {
          path: ["personId"],
          message: "Nobody stands in for themselves.",
        }),
    ),
    defaultValues: { personId: "", forPersonId: "", fromOn: todayOn, toOn: todayOn },
  });
  const appoint = useChange(
    (input: RouteBody<"appointDeputy">, idempotencyKey) => api.post("appointDeputy", {}, input, { idempotencyKey }),
    onClose,
  );
  const { errors } = form.formState;
  const present = people.filter((person) => person.endedAt === null);
  const choices = (those: readonly Person[]) => those.map((person) => ({ value: person.id, label: person.name }));
  const submit = form.handleSubmit((input) => appoint.mutate(input));
  return (
    <Dialog
      open
      onClose={onClose}
      title="Appoint a deputy"
      lead="A deputy may do what the person away may do, on these dates; the trail says for whom."
      actions={
        <Button filled busy={appoint.isPending} onClick={() => void submit()}>
          Appoint
        </Button>
      }
    >
      <form className="grid gap-4 book:grid-cols-2" onSubmit={(event) => void submit(event)} noValidate>
        <SelectField
          label="Away"
          placeholder="Choose"
          choices={choices(present.filter((person) => person.roles.includes("manager") || person.owns.length > 0))}
          error={errors.forPersonId && "Choose a manager or an owner."}
          {...form.register("forPersonId")}
        />
        <SelectField
          label="Stands in"
          placeholder="Choose"
          choices={choices(present)}
          error={errors.personId && (errors.personId.type === "custom" ? errors.personId.message : "Choose a person.")}
          {...form.register("personId")}
        />
        <DateField label="From" error={errors.fromOn?.message} {...form.register("fromOn")} />
        <DateField label="To, that day included" error={errors.toOn?.message} {...form.register("toOn")} />
        <button type="submit" hidden />
      </form>
      {appoint.error !== null && <ProblemNote error={appoint.error} className="mt-4" />}
    </Dialog>
  );
}
