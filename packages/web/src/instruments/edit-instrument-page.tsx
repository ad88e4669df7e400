/** Change what an instrument is called, where it stands and whose it is. */
import { changeInstrumentInput, type Instrument } from "@wavekeep/api/contract";
import { FormProvider, useForm } from "react-hook-form";
import { useNavigate, useParams } from "react-router";
import type { z } from "zod";
import { Asked } from "../shared/asked.tsx";
import { Refused, rulesOf, showAtFields, useFormVersion, useKeepFromLeaving } from "../shared/form.tsx";
import { NotForYou } from "../shared/not-for-you.tsx";
import { Button, LinkButton, Page, Section, useMay } from "../ui/index.ts";
import { IdentitySections } from "./identity-fields.tsx";
import { useChangeInstrument, useInstrument } from "./queries.ts";

const shape = changeInstrumentInput.omit({ version: true });
type Values = z.input<typeof shape>;

const valuesOf = (instrument: Instrument): Values => ({
  name: instrument.name,
  maker: instrument.maker,
  model: instrument.model,
  serial: instrument.serial,
  ownerId: instrument.owner.id,
  place: instrument.place,
  altitudeM: instrument.altitudeM,
  purchasedOn: instrument.purchasedOn,
});

export function EditInstrumentPage() {
  const { instrumentId = "" } = useParams();
  const instrument = useInstrument(instrumentId);
  const may = useMay();
  if (!may("instrument.change")) return <NotForYou title="Edit the instrument" who="a lab manager" />;
  if (instrument.data !== undefined)
    return <EditInstrumentForm instrument={instrument.data} refetch={() => void instrument.refetch()} />;
  return (
    <Page title="Edit the instrument">
      <Section title="Instrument">
        <Asked query={instrument}>{() => null}</Asked>
      </Section>
    </Page>
  );
}

function EditInstrumentForm({ instrument, refetch }: { instrument: Instrument; refetch: () => void }) {
  const navigate = useNavigate();
  const { version, takeCurrent } = useFormVersion(instrument.version);
  const change = useChangeInstrument(instrument.id, () => void navigate(`/instruments/${instrument.id}`));
  const form = useForm<Values, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: valuesOf(instrument),
  });
  useKeepFromLeaving(form.formState.isDirty && !change.isSuccess);
  const submit = form.handleSubmit((values) =>
    change.mutate(
      { ...values, version },
      {
        onError: (error) => {
          showAtFields(error, form.setError);
          refetch();
        },
      },
    ),
  );
  return (
    <FormProvider {...form}>
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Page
          title={`Edit ${instrument.name}`}
          aside="Instruments"
          lead="Each change is kept in the trail with what stood before."
        >
          <IdentitySections />
          <Section title="Save">
            <Refused
              error={change.error}
              onKeepMine={() => {
                takeCurrent();
                change.reset();
              }}
              onTakeTheirs={() => {
                takeCurrent();
                form.reset(valuesOf(instrument));
                change.reset();
              }}
            />
            <div className="flex flex-wrap gap-3">
              <Button filled type="submit" busy={change.isPending}>
                Save changes
              </Button>
              <LinkButton to={`/instruments/${instrument.id}`}>Cancel</LinkButton>
            </div>
          </Section>
        </Page>
      </form>
    </FormProvider>
  );
}
