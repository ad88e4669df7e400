/** A replaced grating, detector, slit or laser: this configuration ends, the next begins, and their histories are never joined. */
import { nextConfigurationInput, type Configuration, type Instrument } from "@wavekeep/api/contract";
import { addDays } from "date-fns";
import { FormProvider, useForm } from "react-hook-form";
import type { z } from "zod";
import { FormText, Refused, rulesOf, showAtFields, useFormVersion, useKeepFromLeaving } from "../shared/form.tsx";
import { Button, dayOf, Section, useZone } from "../ui/index.ts";
import {
  AxisSection,
  configurationValues,
  DecisionSection,
  OpticsSection,
  ReasonField,
  ToleranceFields,
} from "./configuration-fields.tsx";
import { useInstrument, useNextConfiguration } from "./queries.ts";

const shape = nextConfigurationInput.omit({ version: true });
type Values = z.input<typeof shape>;

export function NextConfigurationForm({
  instrument,
  configuration,
  onClose,
}: {
  instrument: Instrument;
  configuration: Configuration;
  onClose: () => void;
}) {
  const zone = useZone();
  const current = useInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(instrument.version);
  const change = useNextConfiguration(instrument.id, onClose);
  const form = useForm<Values, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: {
      reason: "",
      fromOn: dayOf(new Date(), zone),
      configuration: configurationValues(configuration),
      tolerance: configuration.tolerance.segments,
      firstDueOn: dayOf(addDays(new Date(), 1), zone),
    },
  });
  useKeepFromLeaving(form.formState.isDirty && !change.isSuccess);
  const submit = form.handleSubmit((values) =>
    change.mutate(
      { ...values, version },
      {
        onError: (error) => {
          showAtFields(error, form.setError);
          void current.refetch();
        },
      },
    ),
  );
  return (
    <FormProvider {...form}>
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Section title="Next configuration" note="The one in use ends; its checks, axis and drift stay with it.">
          <div className="grid gap-x-6 gap-y-4 book:grid-cols-2">
            <FormText name="fromOn" label="From" type="date" />
            <ReasonField label="What was replaced, and why" />
          </div>
        </Section>
        <AxisSection withName withCoefficients />
        <OpticsSection />
        <Section title="Tolerance" note="The largest error allowed, by segment of the range.">
          <ToleranceFields name="tolerance" />
        </Section>
        <DecisionSection withFirstDue />
        <Section title="Begin it">
          <Refused
            error={change.error}
            onKeepMine={() => {
              takeCurrent();
              change.reset();
            }}
            onTakeTheirs={onClose}
          />
          <div className="flex flex-wrap gap-3">
            <Button filled type="submit" busy={change.isPending}>
              Begin the next configuration
            </Button>
            <Button onClick={onClose}>Cancel</Button>
          </div>
        </Section>
      </form>
    </FormProvider>
  );
}
