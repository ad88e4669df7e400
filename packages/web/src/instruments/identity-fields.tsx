/** Fields of the instrument itself: name, maker, place, owner. */
import type { ReactNode } from "react";
import { FormNumber, FormSelect, FormText } from "../shared/form.tsx";
import { Section } from "../ui/index.ts";
import { usePeople } from "./queries.ts";

const grid = "grid gap-x-6 gap-y-4 book:grid-cols-2 wide:grid-cols-4";

/** People who may own an instrument or be given a check: members, pure auditors excepted. */
export function useOwnerChoices(): { value: string; label: string }[] {
  const people = usePeople();
  return (people.data?.people ?? [])
    .filter((person) => person.endedAt === null && !(person.roles.length === 1 && person.roles[0] === "auditor"))
    .map((person) => ({ value: person.id, label: person.name }));
}

export function IdentitySections({ kindField }: { kindField?: ReactNode }) {
  const owners = useOwnerChoices();
  return (
    <>
      <Section title="Instrument" note="Name it as the lab calls it; the name stands on reports.">
        <div className={grid}>
          <FormText name="name" label="Name" className="book:col-span-2" autoFocus />
          {kindField}
          <FormText name="maker" label="Maker" />
          <FormText name="model" label="Model" />
          <FormText name="serial" label="Serial number" />
          <FormText name="purchasedOn" label="Purchased on" type="date" empty={null} />
        </div>
      </Section>
      <Section
        title="Place and owner"
        note="The owner is told when the limit comes near and decides what a failed check meant for past results."
      >
        <div className={grid}>
          <FormText name="place" label="Place" note="Bench, room" />
          <FormNumber name="altitudeM" label="Altitude" unit="m" note="Left empty, the lab’s" />
          <FormSelect
            name="ownerId"
            label="Owner"
            className="book:col-span-2"
            choices={owners}
            placeholder="Choose a person"
          />
        </div>
      </Section>
    </>
  );
}
