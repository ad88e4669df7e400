/** A form in a dialog: what was typed stays whatever the server answers. */
import type { ReactNode } from "react";
import { FormProvider, type FieldValues, type UseFormReturn } from "react-hook-form";
import { Button, Dialog } from "../ui/index.ts";
import { Refused } from "./form.tsx";

interface DialogFormProps<Values extends FieldValues, Output extends FieldValues> {
  title: string;
  /** What will happen, in words. */
  lead?: ReactNode;
  confirmLabel: string;
  form: UseFormReturn<Values, unknown, Output>;
  onSubmit: (values: Output) => void;
  onClose: () => void;
  busy: boolean;
  error: unknown;
  onKeepMine?: () => void;
  onTakeTheirs?: () => void;
  children: ReactNode;
}

export function DialogForm<Values extends FieldValues, Output extends FieldValues>({
  title,
  lead,
  confirmLabel,
  form,
  onSubmit,
  onClose,
  busy,
  error,
  onKeepMine,
  onTakeTheirs,
  children,
}: DialogFormProps<Values, Output>) {
  const submit = form.handleSubmit((values) => {
    if (!busy) onSubmit(values);
  });
  return (
    <Dialog
      open
      onClose={onClose}
      title={title}
      lead={lead}
      actions={
        <Button filled type="submit" form="dialog-form" busy={busy}>
          {confirmLabel}
        </Button>
      }
    >
      <FormProvider {...form}>
        <form
          id="dialog-form"
          noValidate
          onSubmit={(event) => void submit(event)}
          className="grid grid-cols-[minmax(0,1fr)] gap-4"
        >
          {children}
          <Refused error={error} onKeepMine={onKeepMine} onTakeTheirs={onTakeTheirs} />
        </form>
      </FormProvider>
    </Dialog>
  );
}
