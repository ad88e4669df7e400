/** What forms share: plain words for what a shape refuses, fields bound to the form library, and the stale form. */
import { zodResolver } from "@hookform/resolvers/zod";
import { useIsFetching } from "@tanstack/react-query";
import { useEffect, useState, type ReactNode } from "react";
import {
  Controller,
  useFormContext,
  type FieldErrors,
  type FieldPath,
  type FieldValues,
  type Resolver,
  type UseFormSetError,
} from "react-hook-form";
import type { z } from "zod";
import {
  ApiProblem,
  Button,
  Field,
  NumberField,
  ProblemNote,
  SelectField,
  TextArea,
  type Choice,
} from "../ui/index.ts";

/** Says in plain words what a shape refuses; a shape's own sentence goes before it. */
function plainIssue(issue: z.core.$ZodRawIssue): string | undefined {
  if (issue.code === "invalid_type") {
    if (typeof issue.input === "number" && Number.isNaN(issue.input)) return "This cannot be read as one number.";
    return "Fill this in.";
  }
  if (issue.code === "too_small") {
    const least = Number(issue.minimum);
    if (issue.origin === "string") return least <= 1 ? "Fill this in." : `At least ${least} characters.`;
    if (issue.origin === "array") return least <= 1 ? "At least one." : `At least ${least}.`;
    return issue.inclusive ? `At least ${least}.` : `More than ${least}.`;
  }
  if (issue.code === "too_big") {
    const most = Number(issue.maximum);
    return issue.origin === "string" ? `At most ${most} characters.` : `At most ${most}.`;
  }
  if (issue.code === "invalid_format" || issue.code === "invalid_value") return "Choose one.";
  return undefined;
}

/** Rules of a form from the shape that the server reads it by. */
export function rulesOf<Input extends FieldValues, Output>(
  shape: z.ZodType<Output, Input>,
): Resolver<Input, unknown, Output> {
  return zodResolver(shape as never, { error: plainIssue } as never) as unknown as Resolver<Input, unknown, Output>;
}

/** Puts what the server refused at the fields that it names; the first is focused. */
export function showAtFields<Values extends FieldValues>(error: unknown, setError: UseFormSetError<Values>): void {
  if (!(error instanceof ApiProblem)) return;
  error.document.fields?.forEach((field, index) => {
    setError(field.path as FieldPath<Values>, { message: field.message }, { shouldFocus: index === 0 });
  });
}

function messageAt(errors: FieldErrors, name: string): string | undefined {
  let at: unknown = errors;
  for (const part of name.split(".")) at = (at as Record<string, unknown> | undefined)?.[part];
  const message = (at as { message?: unknown } | undefined)?.message;
  return typeof message === "string" ? message : undefined;
}

interface Bound {
  name: string;
  label: ReactNode;
  note?: ReactNode;
  className?: string;
  labelHidden?: boolean;
}

/** One line of text; `empty` is what an empty field stands for. */
export function FormText({
  name,
  label,
  note,
  className,
  type,
  autoFocus,
  empty = "",
}: Bound & { type?: "text" | "date"; autoFocus?: boolean; empty?: "" | null }) {
  const { register, formState } = useFormContext();
  return (
    <Field
      label={label}
      note={note}
      className={className}
      type={type ?? "text"}
      autoComplete="off"
      autoFocus={autoFocus}
      error={messageAt(formState.errors, name)}
      {...register(name, { setValueAs: (value: unknown) => (value === "" || value === null ? empty : value) })}
    />
  );
}

export function FormArea({ name, label, note, className }: Bound) {
  const { register, formState } = useFormContext();
  return (
    <TextArea
      label={label}
      note={note}
      className={className}
      error={messageAt(formState.errors, name)}
      {...register(name)}
    />
  );
}

export function FormSelect({
  name,
  label,
  note,
  className,
  choices,
  placeholder,
  empty = "",
}: Bound & { choices: readonly Choice[]; placeholder?: string; empty?: "" | null }) {
  const { control, formState } = useFormContext();
  // Held by the form, not by the page: the choices may come after the value.
  return (
    <Controller
      control={control}
      name={name}
      render={({ field }) => (
        <SelectField
          label={label}
          note={note}
          className={className}
          choices={choices}
          placeholder={placeholder}
          error={messageAt(formState.errors, name)}
          name={field.name}
          ref={field.ref}
          onBlur={field.onBlur}
          value={typeof field.value === "string" ? field.value : ""}
          onChange={(event) => field.onChange(event.target.value === "" ? empty : event.target.value)}
        />
      )}
    />
  );
}

/** A number with its unit. `scale` 100 shows a share of one as per cent. */
export function FormNumber({
  name,
  label,
  note,
  className,
  unit,
  scale = 1,
  labelHidden,
}: Bound & { unit?: string; scale?: number }) {
  const { control, formState } = useFormContext();
  return (
    <Controller
      control={control}
      name={name}
      render={({ field }) => (
        <NumberField
          label={label}
          labelHidden={labelHidden}
          note={note}
          className={className}
          unit={unit}
          name={field.name}
          ref={field.ref}
          onBlur={field.onBlur}
          value={typeof field.value === "number" ? Number((field.value * scale).toPrecision(12)) : null}
          onChange={(value) => field.onChange(value === null ? null : Number((value / scale).toPrecision(12)))}
          error={messageAt(formState.errors, name)}
        />
      )}
    />
  );
}

/** True for a refusal that says somebody changed the thing meanwhile. */
export const isStale = (error: unknown): boolean => error instanceof ApiProblem && error.kind === "stale";

interface RefusedProps {
  error: unknown;
  /** Asks for what stands now, so that the form may be sent again over it. */
  onKeepMine?: () => void;
  /** Throws away what was typed and shows what stands now. */
  onTakeTheirs?: () => void;
}

/** What the server refused, above the buttons; what it says of a field stands at the field. A stale form keeps what was typed and offers both ways on. */
export function Refused({ error, ...ways }: RefusedProps) {
  if (error === null || error === undefined) return null;
  return (
    <div className="my-4">
      <ProblemNote error={error} withFields={false} />
      {isStale(error) && <WaysOn {...ways} />}
    </div>
  );
}

/** What stands now is asked for after a refusal; until it is here, either way on would take what was just refused. */
function WaysOn({ onKeepMine, onTakeTheirs }: Omit<RefusedProps, "error">) {
  const isAsking = useIsFetching() > 0;
  if (onKeepMine === undefined && onTakeTheirs === undefined) return null;
  return (
    <div className="mt-3 flex flex-wrap gap-3">
      {onKeepMine !== undefined && (
        <Button busy={isAsking} onClick={onKeepMine}>
          Keep what I typed
        </Button>
      )}
      {onTakeTheirs !== undefined && (
        <Button busy={isAsking} onClick={onTakeTheirs}>
          Show what stands now
        </Button>
      )}
    </div>
  );
}

/** The version that a form is sent with: the one it was opened at, until the person asks for the newer one. */
export function useFormVersion(current: number): { version: number; takeCurrent: () => void } {
  const [version, setVersion] = useState(current);
  return { version, takeCurrent: () => setVersion(current) };
}

/** Asks before the page is left by closing or reloading while something typed is not kept yet. */
export function useKeepFromLeaving(isUnsaved: boolean): void {
  useEffect(() => {
    if (!isUnsaved) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener("beforeunload", ask);
    return () => window.removeEventListener("beforeunload", ask);
  }, [isUnsaved]);
}
