/**
 * Begins a configuration. In place of one: a grating, detector, slit or laser was replaced, the present one ends, and their
 * histories are never joined. Beside those there are: a second channel, which asks for a name, and for one of the first.
 */
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
import { useNextConfiguration, useRefreshInstrument } from "./queries.ts";

const shape = nextConfigurationInput.omit({ version: true });
type Values = z.input<typeof shape>;

interface NextConfigurationProps {
  instrument: Instrument;
  /** The one it replaces, or the one whose set-up it starts from. */
  configuration: Configuration;
  kind: "replace" | "add";
  onClose: () => void;
  onBegun: (reply: Instrument) => void;
}

export function NextConfigurationForm({ instrument, configuration, kind, onClose, onBegun }: NextConfigurationProps) {
  const zone = useZone();
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(instrument.version);
  const change = useNextConfiguration(instrument.id, onBegun);
  const present = instrument.configurations.filter((item) => item.toOn === null);
  const unnamed = kind === "add" && present.some((item) => item.name === null);
  const replaces = kind === "replace";
  const form = useForm<Values, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: {
      replacesId: replaces ? configuration.id : null,
      presentName: null,
      reason: "",
      fromOn: dayOf(new Date(), zone),
      configuration: { ...configurationValues(configuration), ...(replaces ? {} : { name: null }) },
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
          refresh();
        },
      },
    ),
  );
  return (
    <FormProvider {...form}>
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Section
          title={replaces ? "Replace a part" : "Add a channel or grating"}
          note={
            replaces
              ? `${configuration.name ?? "The one in use"} ends; its checks, axis and drift stay with it.`
              : "It has its own axis, tolerance, checks and dates, beside what there is."
          }
        >
          <div className="grid gap-x-6 gap-y-4 book:grid-cols-2">
            <FormText name="fromOn" label="From" type="date" />
            <ReasonField label={replaces ? "What was replaced, and why" : "What came, and why"} />
            {unnamed && (
              <FormText
                name="presentName"
                label="Name of the one there is"
                note="It had none while it was the only one; from now on it is called so"
                empty={null}
              />
            )}
          </div>
        </Section>
        <AxisSection
          nameNote={
            !replaces || present.length > 1
              ? "Channel, grating, slit or laser: near infrared, 1 200 lines"
              : "What tells it from the one before: 1 200 lines. It may stay empty."
          }
          withCoefficients
        />
        <OpticsSection />
        <Section title="Tolerance" note="The largest error allowed, by segment of the range.">
          <ToleranceFields name="tolerance" />
        </Section>
        <DecisionSection withFirstDue />
        <Section title={replaces ? "Replace" : "Add"}>
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
              {replaces ? "Replace" : "Add"}
            </Button>
            <Button onClick={onClose}>Cancel</Button>
          </div>
        </Section>
      </form>
    </FormProvider>
  );
}
