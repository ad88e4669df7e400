/** Leave a line out, for what can be seen in the data; the server looks whether it can be seen. */
import { leaveOutReason, leftOutLine } from "@wavekeep/api/contract";
import type { Analysis, LineResult } from "@wavekeep/core";
import { useState } from "react";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, FormSelect, rulesOf } from "../shared/form.tsx";
import { leaveOutWords } from "../shared/words.ts";
import type { DraftKeeper } from "./use-draft.ts";
import { lineName } from "./verdict-sentence.ts";

const consequence = (line: LineResult) =>
  line.required
    ? "The procedure requires this line: without it the verdict is inconclusive."
    : "The verdict with every line stays beside the one that is submitted.";

/** What the core saw in the line, as a first choice. */
function firstReason(line: LineResult): z.infer<typeof leaveOutReason> {
  if (line.flags.includes("saturated")) return "saturated";
  if (line.flags.includes("spike")) return "spike";
  if (line.flags.includes("weak")) return "too-weak";
  if (line.flags.includes("poor-fit") || line.flags.includes("room-light") || line.flags.includes("edge"))
    return "disturbed";
  return "blended";
}

export function LeaveOutDialog({
  line,
  analysis,
  keeper,
  onClose,
}: {
  line: LineResult;
  analysis: Analysis;
  keeper: DraftKeeper;
  onClose: () => void;
}) {
  const [isBusy, setBusy] = useState(false);
  const [error, setError] = useState<unknown>(null);
  const form = useForm<z.input<typeof leftOutLine>, unknown, z.output<typeof leftOutLine>>({
    resolver: rulesOf(leftOutLine),
    defaultValues: { wavelengthNm: line.wavelengthNm ?? 0, reason: firstReason(line), note: "" },
  });
  const leaveOut = async (left: z.output<typeof leftOutLine>) => {
    setBusy(true);
    setError(null);
    try {
      await keeper.apply({
        leftOut: [...keeper.draft.leftOut.filter((other) => other.wavelengthNm !== left.wavelengthNm), left],
      });
      onClose();
    } catch (problem) {
      setError(problem);
    } finally {
      setBusy(false);
    }
  };
  return (
    <DialogForm
      title={`Leave out ${lineName(line, analysis.axisUnit)}`}
      lead={`For what can be seen in the data, never for its error. ${consequence(line)}`}
      confirmLabel="Leave it out"
      form={form}
      onClose={onClose}
      busy={isBusy}
      error={error}
      onSubmit={(values) => void leaveOut(values)}
    >
      <FormSelect
        name="reason"
        label="What is seen"
        choices={leaveOutReason.options.map((value) => ({ value, label: leaveOutWords[value] }))}
      />
      <FormArea name="note" label="Where it is seen" note="The reviewer reads it beside the line." />
    </DialogForm>
  );
}
