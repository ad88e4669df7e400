/** Register an instrument: what it is, its axis and optics, its tolerance and interval. */
import { createInstrumentInput, instrumentKind, type InstrumentKind } from "@wavekeep/api/contract";
import { addDays } from "date-fns";
import { FormProvider, useForm } from "react-hook-form";
import { useNavigate } from "react-router";
import type { z } from "zod";
import { FormSelect, Refused, rulesOf, showAtFields, useKeepFromLeaving } from "../shared/form.tsx";
import { kindWords } from "../shared/words.ts";
import { Button, dayOf, LinkButton, Page, Section, useMay, useMe } from "../ui/index.ts";
import {
  AxisSection,
  DecisionSection,
  newConfiguration,
  OpticsSection,
  ToleranceFields,
} from "./configuration-fields.tsx";
import { IdentitySections } from "./identity-fields.tsx";
import { useCreateInstrument } from "./queries.ts";
import { NotForYou } from "../shared/not-for-you.tsx";

type Values = z.input<typeof createInstrumentInput>;

export function NewInstrumentPage() {
  const may = useMay();
  if (!may("instrument.change")) return <NotForYou title="Register an instrument" who="a lab manager" />;
  return <NewInstrumentForm />;
}

function NewInstrumentForm() {
  const navigate = useNavigate();
  const me = useMe();
  const create = useCreateInstrument((instrumentId) => void navigate(`/instruments/${instrumentId}`));
  const form = useForm<Values, unknown, z.output<typeof createInstrumentInput>>({
    resolver: rulesOf(createInstrumentInput),
    defaultValues: {
      name: "",
      kind: "array",
      maker: "",
      model: "",
      serial: "",
      ownerId: me.person.id,
      place: "",
      altitudeM: null,
      purchasedOn: null,
      configuration: newConfiguration("array"),
      tolerance: [
        { fromNm: null as unknown as number, toNm: null as unknown as number, toleranceNm: null as unknown as number },
      ],
      firstDueOn: dayOf(addDays(new Date(), 7), me.lab.zone),
    },
  });
  useKeepFromLeaving(form.formState.isDirty && !create.isSuccess);
  const submit = form.handleSubmit((values) =>
    create.mutate(values, { onError: (error) => showAtFields(error, form.setError) }),
  );
  return (
    <FormProvider {...form}>
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Page
          title="Register an instrument"
          aside="Instruments"
          lead="Its first check can begin as soon as it is registered."
        >
          <IdentitySections
            kindField={
              <FormSelect
                name="kind"
                label="Kind"
                className="book:col-span-2"
                choices={instrumentKind.options.map((kind: InstrumentKind) => ({
                  value: kind,
                  label: kindWords[kind],
                }))}
              />
            }
          />
          <AxisSection nameNote={null} withCoefficients />
          <OpticsSection />
          <Section title="Tolerance" note="The largest error allowed, by segment of the range.">
            <ToleranceFields name="tolerance" />
          </Section>
          <DecisionSection withFirstDue />
          <Section title="Register">
            <Refused error={create.error} />
            <div className="flex flex-wrap gap-3">
              <Button filled type="submit" busy={create.isPending}>
                Register the instrument
              </Button>
              <LinkButton to="/instruments">Cancel</LinkButton>
            </div>
          </Section>
        </Page>
      </form>
    </FormProvider>
  );
}
