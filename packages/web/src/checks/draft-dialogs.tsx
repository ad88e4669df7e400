/** Setting a draft aside, and abandoning an attempt for the next: each with a reason, each stays on record. */
import type { Check } from "@wavekeep/api/contract";
import { reason } from "@wavekeep/api/contract";
import { useForm } from "react-hook-form";
import { useNavigate } from "react-router";
import { z } from "zod";
import { DialogForm } from "../shared/dialog-form.tsx";
import { calledWords } from "../shared/words.ts";
import { FormArea, rulesOf } from "../shared/form.tsx";
import { useNewAttempt, useSetAside } from "./queries.ts";
import type { DraftKeeper } from "./use-draft.ts";

const shape = z.object({ reason });

interface DraftDialogProps {
  check: Check;
  keeper: DraftKeeper;
  onClose: () => void;
}

const useReasonForm = () =>
  useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { reason: "" },
  });

export function SetAsideDialog({ check, keeper, onClose }: DraftDialogProps) {
  const navigate = useNavigate();
  const { summary } = check;
  const setAside = useSetAside(summary.id, () => void navigate(`/checks/${summary.id}`));
  const form = useReasonForm();
  const fails = check.analysis?.verdict?.verdict === "fail";
  return (
    <DialogForm
      title={`Set ${summary.number} aside`}
      lead={
        fails
          ? `Its last verdict is out of tolerance: ${calledWords(summary)} is put on hold, as if it were submitted. The draft and its attempts stay listed.`
          : "The draft and its attempts stay listed; it can be taken up again."
      }
      confirmLabel="Set aside"
      form={form}
      onClose={onClose}
      busy={setAside.isPending}
      error={setAside.error}
      onSubmit={(values) =>
        void keeper.flush().then(
          (version) => setAside.mutate({ ...values, version }),
          () => onClose(),
        )
      }
    >
      <FormArea name="reason" label="Reason" />
    </DialogForm>
  );
}

export function NewAttemptDialog({ check, keeper, onClose }: DraftDialogProps) {
  const newAttempt = useNewAttempt(check.summary.id, onClose);
  const form = useReasonForm();
  return (
    <DialogForm
      title={`Abandon attempt ${check.currentAttempt}`}
      lead={`Its files and its result stay in the check, and the reviewer sees them. Attempt ${check.currentAttempt + 1} begins without files.`}
      confirmLabel={`Begin attempt ${check.currentAttempt + 1}`}
      form={form}
      onClose={onClose}
      busy={newAttempt.isPending}
      error={newAttempt.error}
      onSubmit={(values) =>
        void keeper.flush().then(
          (version) => newAttempt.mutate({ ...values, version }),
          () => onClose(),
        )
      }
    >
      <FormArea name="reason" label="Why it is repeated" note="Seven lines saturated at 20 ms" />
    </DialogForm>
  );
}
