/** Register a source, or change one. */
import { sourceInput, sourceKind, type Source } from "@wavekeep/api/contract";
import { Controller, FormProvider, useForm, useFormContext, useWatch, type UseFormReturn } from "react-hook-form";
import type { ReactNode } from "react";
import { useNavigate } from "react-router";
import type { z } from "zod";
import {
  FormArea,
  FormNumber,
  FormSelect,
  FormText,
  Refused,
  rulesOf,
  showAtFields,
  useFormVersion,
  useKeepFromLeaving,
} from "../shared/form.tsx";
import { sentenceCase, sourceKindWords } from "../shared/words.ts";
import { Button, Field, LinkButton, Page, Section } from "../ui/index.ts";
import { useChangeSource, useCreateSource, useFleet } from "./queries.ts";

type Values = z.input<typeof sourceInput>;
type Form = UseFormReturn<Values, unknown, z.output<typeof sourceInput>>;

const grid = "grid gap-x-6 gap-y-4 book:grid-cols-2 wide:grid-cols-4";

const valuesOf = (source: Source): Values => ({
  label: source.label,
  name: source.name,
  kind: source.kind,
  elements: source.elements,
  laserLineNm: source.laserLineNm,
  maker: source.maker,
  serial: source.serial,
  builtIntoInstrumentId: source.builtIntoInstrumentId,
  warmUpMinutes: source.warmUpMinutes,
  reviewDueOn: source.reviewDueOn,
  note: source.note,
});

/** Element symbols as people type them: `Hg Ar`, `Hg, Ar`, `hg-ar`. */
function ElementsField() {
  const { control } = useFormContext<Values>();
  return (
    <Controller
      control={control}
      name="elements"
      render={({ field, fieldState }) => (
        <Field
          label="Lines of these elements"
          note="Symbols with spaces or commas between: Hg Ar"
          defaultValue={field.value.join(" ")}
          autoComplete="off"
          name={field.name}
          ref={field.ref}
          onBlur={field.onBlur}
          error={fieldState.error === undefined ? undefined : "Element symbols of one or two letters."}
          onChange={(event) =>
            field.onChange(
              event.target.value
                .split(/[\s,;+/-]+/)
                .filter((word) => word !== "")
                .map((word) => word.charAt(0).toUpperCase() + word.slice(1).toLowerCase()),
            )
          }
        />
      )}
    />
  );
}

function SourceSections({ form }: { form: Form }) {
  const kind = useWatch({ control: form.control, name: "kind" });
  const fleet = useFleet();
  return (
    <>
      <Section title="Source" note="The label is what stands on it on the shelf.">
        <div className={grid}>
          <FormText name="label" label="Label" note="HA-2" autoFocus />
          <FormText name="name" label="Name" className="wide:col-span-2" note="Mercury-argon pen lamp" />
          <FormSelect
            name="kind"
            label="Kind"
            choices={sourceKind.options.map((value) => ({ value, label: sentenceCase(sourceKindWords[value]) }))}
          />
          <ElementsField />
          {kind === "laser" && <FormNumber name="laserLineNm" label="Laser line" unit="nm" />}
          {kind === "built-in" && (
            <FormSelect
              name="builtIntoInstrumentId"
              label="Built into"
              placeholder="Choose an instrument"
              empty={null}
              choices={(fleet.data?.items ?? []).map((row) => ({ value: row.id, label: row.name }))}
            />
          )}
          <FormText name="maker" label="Maker" />
          <FormText name="serial" label="Serial number" />
          <FormNumber name="warmUpMinutes" label="Warm-up" unit="min" />
          <FormText name="reviewDueOn" label="Review due" type="date" empty={null} />
        </div>
        <FormArea name="note" label="Note" className="mt-4 max-w-[720px]" />
      </Section>
    </>
  );
}

function Frame({
  form,
  title,
  lead,
  submit,
  children,
}: {
  form: Form;
  title: string;
  lead: string;
  submit: (values: z.output<typeof sourceInput>) => void;
  children: ReactNode;
}) {
  return (
    <FormProvider {...form}>
      <form noValidate onSubmit={(event) => void form.handleSubmit(submit)(event)}>
        <Page title={title} aside="Sources" lead={lead}>
          <SourceSections form={form} />
          {children}
        </Page>
      </form>
    </FormProvider>
  );
}

export function NewSourceForm() {
  const navigate = useNavigate();
  const create = useCreateSource((sourceId) => void navigate(`/sources/${sourceId}`));
  const form: Form = useForm<Values, unknown, z.output<typeof sourceInput>>({
    resolver: rulesOf(sourceInput),
    defaultValues: {
      label: "",
      name: "",
      kind: "low-pressure-lamp",
      elements: [],
      laserLineNm: null,
      maker: "",
      serial: "",
      builtIntoInstrumentId: null,
      warmUpMinutes: 15,
      reviewDueOn: null,
      note: "",
    },
  });
  useKeepFromLeaving(form.formState.isDirty && !create.isSuccess);
  return (
    <Frame
      form={form}
      title="Register a source"
      lead="Its certificate is stored on its own page, once it is registered."
      submit={(values) => create.mutate(values, { onError: (error) => showAtFields(error, form.setError) })}
    >
      <Section title="Register">
        <Refused error={create.error} />
        <div className="flex flex-wrap gap-3">
          <Button filled type="submit" busy={create.isPending}>
            Register the source
          </Button>
          <LinkButton to="/sources">Cancel</LinkButton>
        </div>
      </Section>
    </Frame>
  );
}

export function EditSourceForm({
  source,
  refetch,
  onClose,
}: {
  source: Source;
  refetch: () => void;
  onClose: () => void;
}) {
  const { version, takeCurrent } = useFormVersion(source.version);
  const change = useChangeSource(source.id, onClose);
  const form: Form = useForm<Values, unknown, z.output<typeof sourceInput>>({
    resolver: rulesOf(sourceInput),
    defaultValues: valuesOf(source),
  });
  useKeepFromLeaving(form.formState.isDirty && !change.isSuccess);
  return (
    <Frame
      form={form}
      title={`Edit ${source.label}`}
      lead="Each change is kept in the trail with what stood before."
      submit={(values) =>
        change.mutate(
          { ...values, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refetch();
            },
          },
        )
      }
    >
      <Section title="Save">
        <Refused
          error={change.error}
          onKeepMine={() => {
            takeCurrent();
            change.reset();
          }}
          onTakeTheirs={() => {
            takeCurrent();
            form.reset(valuesOf(source));
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
    </Frame>
  );
}
