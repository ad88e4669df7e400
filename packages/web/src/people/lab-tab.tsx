/** The lab's own settings: what its checks and records go by. */
import { zodResolver } from "@hookform/resolvers/zod";
import { useQuery } from "@tanstack/react-query";
import { changeLabInput, type LabSettings } from "@wavekeep/api/contract";
import { Controller, useForm } from "react-hook-form";
import { api, type RouteBody } from "../shared/api.ts";
import { useKeepFromLeaving } from "../shared/form.tsx";
import { useMay } from "../shared/session.ts";
import { useChange } from "../shared/use-change.ts";
import { Button } from "../ui/button.tsx";
import { CheckField, Field, NumberField, SelectField } from "../ui/field.tsx";
import { formatPercent, formatSeal } from "../ui/format.ts";
import { FactList, Section } from "../ui/page.tsx";
import { Skeleton } from "../ui/parts.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { labQuery } from "./queries.ts";

const ruleText = (lab: LabSettings) =>
  lab.decisionRule.kind === "simple"
    ? "simple acceptance, no guard band"
    : `guarded, w = ${lab.decisionRule.r === 1 ? "" : `${lab.decisionRule.r} `}U`;

export function LabTab() {
  const { data, error } = useQuery(labQuery);
  const may = useMay();
  if (data === undefined) {
    return (
      <Section plain title="Lab">
        {error === null ? <Skeleton /> : <ProblemNote error={error} />}
      </Section>
    );
  }
  return may("lab.change") ? <LabForm key={data.version} lab={data} /> : <LabFacts lab={data} />;
}

function LabFacts({ lab }: { lab: LabSettings }) {
  return (
    <Section plain title="Lab" note="Set by the lab's managers.">
      <div className="max-w-[520px]">
        <FactList
          items={[
            { label: "Time zone", value: lab.zone },
            { label: "Altitude", value: lab.altitudeM === null ? "not given" : `${lab.altitudeM}\u202fm` },
            { label: "Decision rule", value: ruleText(lab) },
            { label: "Warning limit", value: formatPercent(lab.warningShare) },
            { label: "Self-approval", value: lab.selfApproval ? "on, printed on every page" : "off" },
            { label: "Signing key", value: formatSeal(lab.signingKeyFingerprint) },
          ]}
        />
      </div>
    </Section>
  );
}

function LabForm({ lab }: { lab: LabSettings }) {
  const form = useForm({
    resolver: zodResolver(changeLabInput),
    defaultValues: {
      name: lab.name,
      zone: lab.zone,
      altitudeM: lab.altitudeM,
      selfApproval: lab.selfApproval,
      warningShare: lab.warningShare,
      decisionRule: lab.decisionRule,
      headMail: lab.headMail,
      version: lab.version,
    },
  });
  const change = useChange((input: RouteBody<"changeLab">) => api.put("changeLab", {}, input));
  const { errors, isDirty } = form.formState;
  useKeepFromLeaving(isDirty && !change.isSuccess);
  const zones = Intl.supportedValuesOf("timeZone");
  // A zone under an older name is kept as it stands.
  const choices = (zones.includes(lab.zone) ? zones : [lab.zone, ...zones]).map((zone) => ({
    value: zone,
    label: zone,
  }));
  return (
    <form noValidate onSubmit={(event) => void form.handleSubmit((input) => change.mutate(input))(event)}>
      <Section
        plain
        title="Lab"
        note="Due dates are dates in this zone. The altitude gives the pressure where no barometer is read."
      >
        <div className="grid max-w-[720px] gap-4 book:grid-cols-2">
          <Field label="Name" error={errors.name?.message} {...form.register("name")} />
          <SelectField label="Time zone" choices={choices} error={errors.zone?.message} {...form.register("zone")} />
          <Controller
            control={form.control}
            name="altitudeM"
            render={({ field, fieldState }) => (
              <NumberField
                label="Altitude"
                unit="m"
                note="Metres above the sea"
                error={fieldState.error?.message}
                {...field}
              />
            )}
          />
          <Field
            label="Mail for the head of the chain"
            type="email"
            note="Each signed head goes there too: a copy that this server cannot change."
            error={errors.headMail?.message}
            {...form.register("headMail", { setValueAs: (text: string | null) => (text === "" ? null : text) })}
          />
        </div>
      </Section>
      <Section
        title="How results are judged"
        note="For new configurations. What stands keeps its own, until it is changed with a reason."
      >
        <div className="grid max-w-[720px] gap-4 book:grid-cols-2">
          <Controller
            control={form.control}
            name="decisionRule"
            render={({ field }) => (
              <SelectField
                label="Decision rule"
                value={field.value.kind}
                onChange={(event) =>
                  field.onChange(event.target.value === "simple" ? { kind: "simple" } : { kind: "guarded", r: 1 })
                }
                note={
                  field.value.kind === "simple"
                    ? "Accepted to the tolerance itself."
                    : "Accepted to the tolerance less the guard band, w = r U."
                }
                choices={[
                  { value: "guarded", label: "guarded acceptance" },
                  { value: "simple", label: "simple acceptance" },
                ]}
              />
            )}
          />
          <Controller
            control={form.control}
            name="decisionRule"
            render={({ field, fieldState }) =>
              field.value.kind === "guarded" ? (
                <NumberField
                  label="Guard band, r times U"
                  value={field.value.r}
                  onChange={(r) => field.onChange({ kind: "guarded", r: r ?? Number.NaN })}
                  error={fieldState.error === undefined ? undefined : "A number above 0, at most 3."}
                />
              ) : (
                <div />
              )
            }
          />
          <Controller
            control={form.control}
            name="warningShare"
            render={({ field, fieldState }) => (
              <NumberField
                label="Warning limit"
                unit="%"
                value={Number.isNaN(field.value) ? Number.NaN : Math.round(field.value * 1000) / 10}
                onChange={(share) => field.onChange(share === null ? Number.NaN : share / 100)}
                note="Above this share of the tolerance a pass is called near limit."
                error={fieldState.error === undefined ? undefined : "From 30 to 100 %."}
              />
            )}
          />
        </div>
        <CheckField
          className="mt-5 max-w-[720px]"
          label="Self-approval"
          note="For a lab of one: who made a check may approve it. It is then printed on every page of the report."
          {...form.register("selfApproval")}
        />
        {change.error !== null && <ProblemNote error={change.error} className="mt-4" />}
        <div className="mt-5 flex flex-wrap items-center gap-4">
          <Button type="submit" filled busy={change.isPending} disabled={!isDirty}>
            Keep these settings
          </Button>
          {change.isSuccess && !isDirty && <span role="status">Kept.</span>}
        </div>
      </Section>
      <Section title="Signing key" note="Its fingerprint stands on reports: a head of the chain is checked against it.">
        <p className="break-all">{lab.signingKeyFingerprint}</p>
      </Section>
    </form>
  );
}
