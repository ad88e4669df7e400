/** Change axis, optics, decision rule or interval of a configuration in place: what was mistyped or measured anew. */
import { configurationInput, type Configuration, type Instrument } from "@wavekeep/api/contract";
import { FormProvider, useForm } from "react-hook-form";
import { z } from "zod";
import { Refused, rulesOf, showAtFields, useFormVersion, useKeepFromLeaving } from "../shared/form.tsx";
import { Button, Section } from "../ui/index.ts";
import { AxisSection, configurationValues, DecisionSection, OpticsSection } from "./configuration-fields.tsx";
import { useChangeConfiguration, useRefreshInstrument } from "./queries.ts";

const shape = z.object({ configuration: configurationInput });

export function OpticsForm({
  instrument,
  configuration,
  onClose,
}: {
  instrument: Instrument;
  configuration: Configuration;
  onClose: () => void;
}) {
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(configuration.version);
  const change = useChangeConfiguration(configuration.id, onClose);
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { configuration: configurationValues(configuration) },
  });
  useKeepFromLeaving(form.formState.isDirty && !change.isSuccess);
  const submit = form.handleSubmit(({ configuration: { axisCoefficients: _kept, ...values } }) =>
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
        <AxisSection
          nameNote={instrument.configurations.length > 1 ? "Channel, grating, slit or laser" : null}
          withCoefficients={false}
        />
        <OpticsSection />
        <DecisionSection withFirstDue={false} />
        <Section
          title="Save"
          note="For what was mistyped or measured anew. A replaced part has its own button: what it was stays on record."
        >
          <Refused
            error={change.error}
            onKeepMine={() => {
              takeCurrent();
              change.reset();
            }}
            onTakeTheirs={() => {
              takeCurrent();
              form.reset({ configuration: configurationValues(configuration) });
              change.reset();
            }}
          />
          <div className="flex flex-wrap gap-3">
            <Button filled type="submit" busy={change.isPending}>
              Save changes
            </Button>
            <Button onClick={onClose}>Cancel</Button>
          </div>
        </Section>
      </form>
    </FormProvider>
  );
}
