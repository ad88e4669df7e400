/** What becomes of the axis that an approved check fitted: a manager puts it in force, and it says what that changes. */
import { adoptAxisInput, type Check } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, rulesOf, showAtFields, useFormVersion } from "../shared/form.tsx";
import { calledWords, configurationPath } from "../shared/words.ts";
import { Button, TextLink, When } from "../ui/index.ts";
import { useAdoptAxis, useRefreshCheck } from "./queries.ts";

type Next = NonNullable<NonNullable<Check["fittedAxis"]>["next"]>;

export function FittedAxis({ check }: { check: Check }) {
  const [isOpen, setOpen] = useState(false);
  if (check.fittedAxis === null) return null;
  const { adopted, next } = check.fittedAxis;
  if (adopted === null && next === null) return null;
  const [path, query] = configurationPath(check.summary).split("?");
  return (
    <div className="mb-6 grid max-w-[720px] gap-3">
      {adopted !== null && (
        <p>
          It was put in force as <b>axis no. {adopted.number}</b> of {calledWords(check.summary)} by {adopted.by.name},{" "}
          <When at={adopted.inForceFrom} />.{" "}
          <TextLink to={`${path}/optics${query === undefined ? "" : `?${query}`}`}>Its axes</TextLink>
        </p>
      )}
      {next !== null && (
        <>
          <p>
            {takesOver(next)} Checks made before keep the one they were judged by. An adjustment is logged, so the drift
            series begins anew here.
          </p>
          <p className="no-print">
            <Button onClick={() => setOpen(true)}>Put this axis in force</Button>
          </p>
        </>
      )}
      {isOpen && next !== null && <AdoptDialog check={check} next={next} onClose={() => setOpen(false)} />}
    </div>
  );
}

const takesOver = ({ number, replaces }: Next) =>
  replaces === null
    ? `As no. ${number}, it is the axis that every check is judged by whose first capture arrives from then on.`
    : `As no. ${number}, it takes over from no. ${replaces} for every check whose first capture arrives from then on.`;

function AdoptDialog({ check, next, onClose }: { check: Check; next: Next; onClose: () => void }) {
  const refresh = useRefreshCheck(check.summary.id);
  const { version, takeCurrent } = useFormVersion(next.configurationVersion);
  const adopt = useAdoptAxis(check.summary.configurationId, onClose);
  const shape = adoptAxisInput.pick({ reason: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { reason: "" },
  });
  return (
    <DialogForm
      title={`Put axis no. ${next.number} of ${calledWords(check.summary)} in force`}
      lead={`${takesOver(next)} The drift series begins anew with “Adjusted, axis no. ${next.number}”.`}
      confirmLabel="Put it in force"
      form={form}
      onClose={onClose}
      busy={adopt.isPending}
      error={adopt.error}
      onKeepMine={() => {
        takeCurrent();
        adopt.reset();
      }}
      onTakeTheirs={onClose}
      onSubmit={(values) =>
        adopt.mutate(
          { ...values, checkId: check.summary.id, version },
          {
            onError: (error) => {
              showAtFields(error, form.setError);
              refresh();
            },
          },
        )
      }
    >
      <FormArea name="reason" label="Reason" note="Stands with the axis, in the trail and in the drift series." />
    </DialogForm>
  );
}
