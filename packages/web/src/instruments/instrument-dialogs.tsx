/** What is done to an instrument on its page, each in a dialog with its consequence in words. */
import {
  changeStandingInput,
  changeToleranceInput,
  endConfigurationInput,
  eventKind,
  logEventInput,
  moveDueDateInput,
  retireInput,
  type Configuration,
  type Instrument,
} from "@wavekeep/api/contract";
import { Controller, useForm, useWatch } from "react-hook-form";
import type { z } from "zod";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, FormSelect, FormText, rulesOf, showAtFields, useFormVersion } from "../shared/form.tsx";
import { calledWords, eventKindWords, sentenceCase, standingWords } from "../shared/words.ts";
import { CheckField, dayOf, formatDate, formatLimit, useMay, useZone } from "../ui/index.ts";
import { ReasonField, ToleranceFields } from "./configuration-fields.tsx";
import { useOwnerChoices } from "./identity-fields.tsx";
import {
  useChangeStanding,
  useChangeTolerance,
  useEndConfiguration,
  useRefreshInstrument,
  useLogEvent,
  useMoveDueDate,
  useRetireInstrument,
} from "./queries.ts";

export interface DialogProps {
  instrument: Instrument;
  configuration: Configuration;
  onClose: () => void;
}

const calledOf = (instrument: Instrument, configuration: Configuration) =>
  calledWords({ instrumentName: instrument.name, configurationName: configuration.name });

export function InstrumentDialogs({ doing, onEnded, ...props }: DialogProps & EndProps & { doing: string | null }) {
  const may = useMay();
  if (props.instrument.retiredAt !== null) return null;
  if (doing === "retire" && may("instrument.change")) return <RetireDialog {...props} />;
  // What has ended is looked at, not changed.
  if (props.configuration.toOn !== null) return null;
  if (doing === "end" && may("instrument.change")) return <EndDialog {...props} onEnded={onEnded} />;
  if (doing === "event" && may("event.log", { instrumentId: props.instrument.id })) return <EventDialog {...props} />;
  if (doing === "hold" && may("standing.change")) return <StandingDialog {...props} />;
  if (doing === "tolerance" && may("tolerance.change")) return <ToleranceDialog {...props} />;
  if (doing === "due" && may("due.change")) return <DueDialog {...props} />;
  return null;
}

function EventDialog({ instrument, configuration, onClose }: DialogProps) {
  const zone = useZone();
  const log = useLogEvent(onClose);
  type Values = z.input<typeof logEventInput>;
  const form = useForm<Values, unknown, z.output<typeof logEventInput>>({
    resolver: rulesOf(logEventInput),
    defaultValues: {
      configurationId: configuration.id,
      kind: "moved",
      title: "",
      happenedOn: dayOf(new Date(), zone),
      note: "",
      breaksDrift: true,
    },
  });
  return (
    <DialogForm
      title={`Log an event of ${calledOf(instrument, configuration)}`}
      lead="It stands as a mark in the drift ribbon and in the trail."
      confirmLabel="Log the event"
      form={form}
      onClose={onClose}
      busy={log.isPending}
      error={log.error}
      onSubmit={(values) => log.mutate(values, { onError: (error) => showAtFields(error, form.setError) })}
    >
      <div className="grid gap-4 book:grid-cols-2">
        <FormSelect
          name="kind"
          label="What happened"
          choices={eventKind.options.map((kind) => ({ value: kind, label: sentenceCase(eventKindWords[kind]) }))}
        />
        <FormText name="happenedOn" label="On" type="date" />
      </div>
      <FormText name="title" label="In a few words" note="As it stands at the ribbon: Moved to bench 3" />
      <FormArea name="note" label="Note" />
      <Controller
        control={form.control}
        name="breaksDrift"
        render={({ field }) => (
          <CheckField
            label="It may have moved the axis"
            note="Then the series begins anew, and no line is drawn through it."
            checked={field.value}
            onChange={(event) => field.onChange(event.target.checked)}
            onBlur={field.onBlur}
            name={field.name}
          />
        )}
      />
    </DialogForm>
  );
}

/** Why it is on hold, with the check that put it there; either may be told by the other already. */
function holdWords({ standing: { reason, checkNumber } }: Configuration): string {
  const plain = reason.replace(/\.$/, "");
  return checkNumber === null || plain.includes(checkNumber) ? plain : `${plain} (${checkNumber})`;
}

const standingChoices = ["out-of-service", "restricted", "in-service", "quarantined", "on-hold"] as const;

function StandingDialog({ instrument, configuration, onClose }: DialogProps) {
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(configuration.version);
  const change = useChangeStanding(configuration.id, onClose);
  const isHold = configuration.standing.standing === "on-hold";
  const shape = changeStandingInput.omit({ version: true });
  type Values = z.input<typeof shape>;
  const form = useForm<Values, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: {
      standing: isHold
        ? "out-of-service"
        : configuration.standing.standing === "retired"
          ? "in-service"
          : configuration.standing.standing,
      restriction: configuration.standing.restriction,
      reason: "",
    },
  });
  const standing = useWatch({ control: form.control, name: "standing" });
  const words = (value: (typeof standingChoices)[number]) =>
    isHold
      ? {
          "out-of-service": "Confirm: out of service",
          restricted: "Confirm: restricted",
          "in-service": "Lift the hold: in service",
          quarantined: "Quarantine",
          "on-hold": "Stay on hold",
        }[value]
      : sentenceCase(standingWords[value]);
  return (
    <DialogForm
      title={
        isHold
          ? `Confirm or lift the hold of ${calledOf(instrument, configuration)}`
          : `Change the standing of ${calledOf(instrument, configuration)}`
      }
      lead={
        isHold
          ? `On hold: ${holdWords(configuration)}. Out of service or restricted, it comes back by an as-left check that passes and is approved. Lifted, it is in service at once, on your reason.`
          : "The change and its reason stand in the trail."
      }
      confirmLabel={standing === "in-service" && isHold ? "Lift the hold" : isHold ? "Confirm" : "Change"}
      form={form}
      onClose={onClose}
      busy={change.isPending}
      error={change.error}
      onKeepMine={() => {
        takeCurrent();
        change.reset();
      }}
      onTakeTheirs={onClose}
      onSubmit={(values) =>
        change.mutate(
          { ...values, restriction: values.standing === "restricted" ? values.restriction : null, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refresh();
            },
          },
        )
      }
    >
      <FormSelect
        name="standing"
        label="Decision"
        choices={standingChoices
          .filter((value) => value !== "on-hold" || !isHold)
          .map((value) => ({ value, label: words(value) }))}
      />
      {standing === "restricted" && (
        <FormText name="restriction" label="Restricted to" note="A range or a use: 300–700 nm" empty={null} />
      )}
      <ReasonField />
    </DialogForm>
  );
}

function ToleranceDialog({ instrument, configuration, onClose }: DialogProps) {
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(configuration.version);
  const change = useChangeTolerance(configuration.id, onClose);
  const shape = changeToleranceInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { segments: configuration.tolerance.segments, reason: "" },
  });
  return (
    <DialogForm
      title={`Change the tolerance of ${calledOf(instrument, configuration)}`}
      lead={`Now ±${formatLimit(configuration.tolerance.segments[0]?.toleranceNm ?? 0)}, version ${configuration.tolerance.version}. A check whose first capture came before keeps the old one; the change shows in reports for a year.`}
      confirmLabel="Set the tolerance"
      form={form}
      onClose={onClose}
      busy={change.isPending}
      error={change.error}
      onKeepMine={() => {
        takeCurrent();
        change.reset();
      }}
      onTakeTheirs={() => {
        takeCurrent();
        form.reset({ segments: configuration.tolerance.segments, reason: "" });
        change.reset();
      }}
      onSubmit={(values) =>
        change.mutate(
          { ...values, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refresh();
            },
          },
        )
      }
    >
      <ToleranceFields name="segments" />
      <ReasonField />
    </DialogForm>
  );
}

function DueDialog({ instrument, configuration, onClose }: DialogProps) {
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(configuration.version);
  const people = useOwnerChoices();
  const change = useMoveDueDate(configuration.id, onClose);
  const shape = moveDueDateInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { dueOn: configuration.dueOn ?? "", assignedToId: configuration.assignedTo?.id ?? null, reason: "" },
  });
  return (
    <DialogForm
      title={`Next check of ${calledOf(instrument, configuration)}`}
      lead={
        configuration.dueOn === null
          ? "No date is set."
          : `Due ${formatDate(configuration.dueOn)}${configuration.assignedTo === null ? "" : `, given to ${configuration.assignedTo.name}`}.`
      }
      confirmLabel="Set the date"
      form={form}
      onClose={onClose}
      busy={change.isPending}
      error={change.error}
      onKeepMine={() => {
        takeCurrent();
        change.reset();
      }}
      onTakeTheirs={onClose}
      onSubmit={(values) =>
        change.mutate(
          { ...values, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refresh();
            },
          },
        )
      }
    >
      <div className="grid gap-4 book:grid-cols-2">
        <FormText name="dueOn" label="Due on" type="date" />
        <FormSelect name="assignedToId" label="Given to" placeholder="Nobody yet" choices={people} empty={null} />
      </div>
      <ReasonField />
    </DialogForm>
  );
}

interface EndProps {
  /** Called when the configuration has ended, before the page shows it. */
  onEnded: () => void;
}

function EndDialog({ instrument, configuration, onClose, onEnded }: DialogProps & EndProps) {
  const zone = useZone();
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(configuration.version);
  const change = useEndConfiguration(configuration.id, onEnded);
  const shape = endConfigurationInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { toOn: dayOf(new Date(), zone), reason: "" },
  });
  return (
    <DialogForm
      title={`End ${calledOf(instrument, configuration)}`}
      lead="Nothing takes its place. Its checks, axes and drift stay and can be read; no check can be begun on it any more, and nothing falls due."
      confirmLabel="End it"
      form={form}
      onClose={onClose}
      busy={change.isPending}
      error={change.error}
      onKeepMine={() => {
        takeCurrent();
        change.reset();
      }}
      onTakeTheirs={onClose}
      onSubmit={(values) =>
        change.mutate(
          { ...values, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refresh();
            },
          },
        )
      }
    >
      <FormText name="toOn" label="Ended on" type="date" />
      <ReasonField />
    </DialogForm>
  );
}

function RetireDialog({ instrument, onClose }: DialogProps) {
  const refresh = useRefreshInstrument(instrument.id);
  const { version, takeCurrent } = useFormVersion(instrument.version);
  const change = useRetireInstrument(instrument.id, onClose);
  const shape = retireInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { reason: "" },
  });
  return (
    <DialogForm
      title={`Retire ${instrument.name}`}
      lead="Its records stay and can be read; no check can be begun on it any more, and nothing falls due."
      confirmLabel="Retire the instrument"
      form={form}
      onClose={onClose}
      busy={change.isPending}
      error={change.error}
      onKeepMine={() => {
        takeCurrent();
        change.reset();
      }}
      onTakeTheirs={onClose}
      onSubmit={(values) =>
        change.mutate(
          { ...values, version },
          {
            onError: refresh,
          },
        )
      }
    >
      <ReasonField />
    </DialogForm>
  );
}
