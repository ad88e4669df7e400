/** Fields of one configuration: axis, range, optics, tolerance, decision rule, interval. Units stand in the fields. */
import type { Configuration, configurationInput, InstrumentKind } from "@wavekeep/api/contract";
import { Controller, useFieldArray, useFormContext, useWatch } from "react-hook-form";
import type { z } from "zod";
import { FormArea, FormNumber, FormSelect, FormText } from "../shared/form.tsx";
import { Button, CheckField, Field, Section, TextButton } from "../ui/index.ts";

export type ConfigurationInput = z.input<typeof configurationInput>;
type ToleranceInput = { fromNm: number; toNm: number; toleranceNm: number }[];

/** Shape that every form with a configuration in it has. */
export interface WithConfiguration {
  configuration: ConfigurationInput;
}

/** A sensible start for each kind; the manager changes what differs. */
export function newConfiguration(kind: InstrumentKind): ConfigurationInput {
  return {
    name: null,
    axisKind: kind === "array" || kind === "raman" ? "pixel" : "wavelength",
    axisMeaning: "standard-air",
    rangeFirstNm: null as unknown as number,
    rangeLastNm: null as unknown as number,
    nominalFwhmNm: null,
    optics: {
      pixels: null,
      pixelPitchUm: null,
      groovesPerMm: null,
      focalLengthMm: null,
      includedAngleDeg: null,
      slitUm: null,
      laserNm: null,
      fullScaleCounts: null,
      adjustmentNote: null,
    },
    intervalDays: 28,
    graceDays: 3,
    setupReproducibilityNm: null,
    decisionRule: { kind: "guarded", r: 1 },
    warningShare: 0.75,
    axisCoefficients: null,
  };
}

/** What stands now, as a form's values; the axis in force is kept unless coefficients are typed. */
export function configurationValues(configuration: Configuration): ConfigurationInput {
  const {
    name,
    axisKind,
    axisMeaning,
    rangeFirstNm,
    rangeLastNm,
    nominalFwhmNm,
    optics,
    intervalDays,
    graceDays,
    setupReproducibilityNm,
    decisionRule,
    warningShare,
  } = configuration;
  return {
    name,
    axisKind,
    axisMeaning,
    rangeFirstNm,
    rangeLastNm,
    nominalFwhmNm,
    optics,
    intervalDays,
    graceDays,
    setupReproducibilityNm,
    decisionRule,
    warningShare,
    axisCoefficients: null,
  };
}

const grid = "grid gap-x-6 gap-y-4 book:grid-cols-2 wide:grid-cols-4";

interface AxisSectionProps {
  /** Why it has a name; null where there is only one, which needs none. */
  nameNote: string | null;
  withCoefficients: boolean;
}

export function AxisSection({ nameNote, withCoefficients }: AxisSectionProps) {
  const axisKind = useWatch<WithConfiguration, "configuration.axisKind">({ name: "configuration.axisKind" });
  return (
    <Section title="Axis and range" note="Units stand beside the fields; a comma or a point will do.">
      <div className={grid}>
        {nameNote !== null && (
          <FormText name="configuration.name" label="Name" note={nameNote} className="book:col-span-2" empty={null} />
        )}
        <FormNumber name="configuration.rangeFirstNm" label="Range from" unit="nm" />
        <FormNumber name="configuration.rangeLastNm" label="Range to" unit="nm" />
        <FormSelect
          name="configuration.axisKind"
          label="Its files count"
          choices={[
            { value: "pixel", label: "pixels" },
            { value: "wavelength", label: "wavelength, nm" },
            { value: "step", label: "motor steps" },
          ]}
        />
        <FormSelect
          name="configuration.axisMeaning"
          label="Its wavelengths mean"
          note="Standard air: 15 °C, 101 325 Pa, dry"
          choices={[
            { value: "standard-air", label: "standard air" },
            { value: "vacuum", label: "vacuum" },
            { value: "room-air", label: "air of the room" },
          ]}
        />
        <FormNumber name="configuration.nominalFwhmNm" label="Nominal resolution, FWHM" unit="nm" />
        <FormNumber
          name="configuration.optics.fullScaleCounts"
          label="Detector full scale"
          unit="counts"
          note="One scan; 65 535 for 16 bit"
        />
        {withCoefficients && axisKind === "pixel" && <CoefficientsField />}
      </div>
    </Section>
  );
}

function CoefficientsField() {
  const { control } = useFormContext<WithConfiguration>();
  return (
    <Controller
      control={control}
      name="configuration.axisCoefficients"
      render={({ field, fieldState }) => (
        <Field
          className="book:col-span-2 wide:col-span-4"
          label="Coefficients of its axis now, if it came with some"
          note="nm in ascending powers of the pixel, counted from 0, with spaces between: 200.1 0.3201 -1.2e-6. Left empty, the first check finds its lines from the range."
          defaultValue={field.value?.join(" ") ?? ""}
          error={
            fieldState.error === undefined
              ? undefined
              : "Two to eight numbers with spaces between, points as decimal signs."
          }
          autoComplete="off"
          name={field.name}
          ref={field.ref}
          onBlur={field.onBlur}
          onChange={(event) => {
            const words = event.target.value
              .trim()
              .replaceAll("\u2212", "-")
              .split(/[\s;]+/)
              .filter((word) => word !== "");
            field.onChange(words.length === 0 ? null : words.map(Number));
          }}
        />
      )}
    />
  );
}

export function OpticsSection() {
  return (
    <Section title="Optics" note="What is known. The drift of an instrument is explained by it.">
      <div className={grid}>
        <FormNumber name="configuration.optics.groovesPerMm" label="Grating" unit="1/mm" />
        <FormNumber name="configuration.optics.focalLengthMm" label="Focal length" unit="mm" />
        <FormNumber name="configuration.optics.includedAngleDeg" label="Included angle" unit="°" />
        <FormNumber name="configuration.optics.slitUm" label="Slit or fibre" unit="µm" />
        <FormNumber name="configuration.optics.pixels" label="Pixels" unit="px" />
        <FormNumber name="configuration.optics.pixelPitchUm" label="Pixel pitch" unit="µm" />
        <FormNumber name="configuration.optics.laserNm" label="Laser" unit="nm" note="Raman only" />
        <FormText
          name="configuration.optics.adjustmentNote"
          label="Adjustment"
          note="What can be adjusted, and how"
          empty={null}
        />
      </div>
    </Section>
  );
}

/** Tolerance by segment; `name` is where the list stands in the form. */
export function ToleranceFields({ name }: { name: string }) {
  const { control, formState } = useFormContext<Record<string, ToleranceInput>>();
  const { fields, append, remove } = useFieldArray({ control, name });
  const listError = (formState.errors as Record<string, { message?: string; root?: { message?: string } } | undefined>)[
    name
  ];
  return (
    <div>
      {fields.map((field, index) => (
        <div
          key={field.id}
          className="mb-3 grid max-w-[560px] grid-cols-[repeat(3,minmax(0,1fr))] items-start gap-x-4 book:grid-cols-[repeat(3,minmax(0,1fr))_56px]"
        >
          <FormNumber name={`${name}.${index}.fromNm`} label="From" unit="nm" />
          <FormNumber name={`${name}.${index}.toNm`} label="To" unit="nm" />
          <FormNumber name={`${name}.${index}.toleranceNm`} label="Tolerance ±" unit="nm" />
          {fields.length > 1 && (
            <TextButton
              className="mt-2 book:mt-7"
              onClick={() => remove(index)}
              aria-label={`Remove segment ${index + 1}`}
            >
              Remove
            </TextButton>
          )}
        </div>
      ))}
      {(listError?.message ?? listError?.root?.message) !== undefined && (
        <p className="text-out type-note">{listError?.message ?? listError?.root?.message}</p>
      )}
      <Button
        onClick={() =>
          append({
            fromNm: null as unknown as number,
            toNm: null as unknown as number,
            toleranceNm: null as unknown as number,
          })
        }
      >
        Add a segment
      </Button>
    </div>
  );
}

export function DecisionSection({ withFirstDue }: { withFirstDue: boolean }) {
  const { control } = useFormContext<WithConfiguration>();
  const rule = useWatch<WithConfiguration, "configuration.decisionRule">({ name: "configuration.decisionRule" });
  return (
    <Section
      title="Decision and interval"
      note="Guarded: a line passes only when its error stays below the tolerance by r times its uncertainty."
    >
      <div className={grid}>
        <Controller
          control={control}
          name="configuration.decisionRule"
          render={({ field }) => (
            <CheckField
              className="pt-6"
              label="Guarded acceptance"
              note={rule.kind === "guarded" ? "w = r U of each line" : "Simple acceptance, w = 0"}
              checked={field.value.kind === "guarded"}
              onChange={(event) =>
                field.onChange(event.target.checked ? { kind: "guarded", r: 1 } : { kind: "simple" })
              }
            />
          )}
        />
        {rule.kind === "guarded" && (
          <FormNumber name="configuration.decisionRule.r" label="r" note="1 unless the lab has a reason" />
        )}
        <FormNumber name="configuration.warningShare" label="Near limit above" unit="% of tolerance" scale={100} />
        <FormNumber
          name="configuration.setupReproducibilityNm"
          label="Set-up reproducibility, u"
          unit="nm"
          note="Standard uncertainty of setting up again; left empty, 0.1 px or step is assumed and shown so"
        />
        <FormNumber name="configuration.intervalDays" label="Checked every" unit="days" />
        <FormNumber name="configuration.graceDays" label="Days of grace" unit="days" />
        {withFirstDue && <FormText name="firstDueOn" label="First check due" type="date" />}
      </div>
    </Section>
  );
}

/** The reason that the trail keeps for a change. */
export function ReasonField({ label = "Reason" }: { label?: string }) {
  return <FormArea name="reason" label={label} note="Stands in the trail and in reports." />;
}
