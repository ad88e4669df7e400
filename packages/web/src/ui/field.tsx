/**
 * Fields: a label above, the unit inside at the right, a note or what is wrong below. Each is a plain input, so that a
 * form library may register it (`{...register("place")}`), and keeps what was typed whatever the server answers.
 */
import {
  useId,
  useState,
  type ComponentProps,
  type InputHTMLAttributes,
  type ReactNode,
  type Ref,
  type SelectHTMLAttributes,
  type TextareaHTMLAttributes,
} from "react";
import { formatNumber, NARROW_SPACE, parseDecimal } from "./format.ts";

interface Common {
  label: ReactNode;
  note?: ReactNode;
  /** What is wrong, in words; said to screen readers as it appears. */
  error?: ReactNode;
  /** Label for screen readers only: where a table head or a heading names it. */
  labelHidden?: boolean;
  className?: string;
}

interface ShellProps extends Common {
  unit?: ReactNode;
  children: (ids: {
    id: string;
    "aria-describedby": string | undefined;
    "aria-invalid": true | undefined;
  }) => ReactNode;
}

function FieldShell({ label, note, error, unit, labelHidden = false, className, children }: ShellProps) {
  const id = useId();
  const noteId = `${id}-note`;
  const hasError = error !== undefined && error !== null && error !== "" && error !== false;
  const says = hasError || (note !== undefined && note !== null && note !== "");
  return (
    <div className={`min-w-0 ${className ?? ""}`}>
      <label htmlFor={id} className={labelHidden ? "sr-only" : "type-label mb-1 block"}>
        {label}
      </label>
      <div className="field-box" data-invalid={hasError}>
        {children({ id, "aria-describedby": says ? noteId : undefined, "aria-invalid": hasError ? true : undefined })}
        {unit !== undefined && <span className="field-unit">{unit}</span>}
      </div>
      <div id={noteId} aria-live="polite" className="type-note mt-1 empty:mt-0">
        {hasError ? <span className="text-out">{error}</span> : note}
      </div>
    </div>
  );
}

type FieldProps = Common & { unit?: ReactNode; ref?: Ref<HTMLInputElement> } & Omit<
    InputHTMLAttributes<HTMLInputElement>,
    "className"
  >;

/** One line of text. */
export function Field({ label, note, error, unit, labelHidden, className, ...input }: FieldProps) {
  return (
    <FieldShell label={label} note={note} error={error} unit={unit} labelHidden={labelHidden} className={className}>
      {(ids) => <input type="text" {...input} {...ids} />}
    </FieldShell>
  );
}

/** A password, which can be looked at: it is typed at benches, with gloves. */
export function PasswordField({ label, note, error, className, ...input }: FieldProps) {
  const [shown, setShown] = useState(false);
  return (
    <FieldShell
      label={label}
      note={note}
      error={error}
      className={className}
      unit={
        <button
          type="button"
          className="text-quiet hover:text-ink type-note cursor-pointer"
          aria-pressed={shown}
          aria-label={shown ? "Hide the password" : "Show the password"}
          onClick={() => setShown(!shown)}
        >
          {shown ? "hide" : "show"}
        </button>
      }
    >
      {(ids) => (
        <input {...input} {...ids} type={shown ? "text" : "password"} autoCapitalize="none" spellCheck={false} />
      )}
    </FieldShell>
  );
}

interface NumberFieldProps extends Common {
  unit?: string;
  /** null: empty. */
  value: number | null | undefined;
  /** Called with null for an empty field and with NaN for what cannot be read, which a form's rules then refuse. */
  onChange: (value: number | null) => void;
  onBlur?: () => void;
  name?: string;
  disabled?: boolean;
  required?: boolean;
  autoFocus?: boolean;
  ref?: Ref<HTMLInputElement>;
}

/** A number with its unit: a comma or a point will do, pasted spaces are cleaned, and the reading is shown when it differs from the text. */
export function NumberField({
  label,
  note,
  error,
  unit,
  labelHidden,
  className,
  value,
  onChange,
  ref,
  ...input
}: NumberFieldProps) {
  const [text, setText] = useState(value === null || value === undefined || Number.isNaN(value) ? "" : String(value));
  const read = text.trim() === "" ? null : (parseDecimal(text) ?? Number.NaN);
  const given = value ?? null;
  // The form was filled from elsewhere (a draft loaded, a reset): what is shown follows, what is being typed stays.
  if (!Object.is(read, given) && !(Number.isNaN(read) && Number.isNaN(given))) {
    setText(given === null || Number.isNaN(given) ? "" : String(given));
  }
  const unreadable = Number.isNaN(read);
  const plain = text.trim().replace("\u2212", "-");
  const reading = read !== null && !unreadable && plain !== String(read) && !/^[+-]?\d*\.?\d*$/.test(plain);
  const places = Math.min((String(read).split(".")[1] ?? "").length, 9);
  return (
    <FieldShell
      label={label}
      labelHidden={labelHidden}
      className={className}
      unit={unit}
      note={
        reading
          ? `Read as ${formatNumber(read, { decimals: places })}${unit === undefined ? "" : `${NARROW_SPACE}${unit}`}`
          : note
      }
      error={unreadable ? "This cannot be read as one number." : error}
    >
      {(ids) => (
        <input
          {...input}
          {...ids}
          ref={ref}
          type="text"
          inputMode="decimal"
          autoComplete="off"
          value={text}
          onChange={(event) => {
            setText(event.target.value);
            onChange(event.target.value.trim() === "" ? null : (parseDecimal(event.target.value) ?? Number.NaN));
          }}
        />
      )}
    </FieldShell>
  );
}

export interface Choice {
  value: string;
  label: string;
  disabled?: boolean;
}

type SelectProps = Common & {
  choices: readonly Choice[];
  /** First, empty choice. */ placeholder?: string;
  ref?: Ref<HTMLSelectElement>;
} & Omit<SelectHTMLAttributes<HTMLSelectElement>, "className">;

/** One of several. The system's own list: it works with every pointer, reader and zoom. */
export function SelectField({
  label,
  note,
  error,
  labelHidden,
  className,
  choices,
  placeholder,
  ...select
}: SelectProps) {
  return (
    <FieldShell label={label} note={note} error={error} labelHidden={labelHidden} className={className}>
      {(ids) => (
        <select {...select} {...ids}>
          {placeholder !== undefined && <option value="">{placeholder}</option>}
          {choices.map((choice) => (
            <option key={choice.value} value={choice.value} disabled={choice.disabled}>
              {choice.label}
            </option>
          ))}
        </select>
      )}
    </FieldShell>
  );
}

/** A date in the lab's zone, `yyyy-mm-dd`. */
export function DateField(props: FieldProps) {
  return <Field {...props} type="date" />;
}

type TextAreaProps = Common & { ref?: Ref<HTMLTextAreaElement> } & Omit<
    TextareaHTMLAttributes<HTMLTextAreaElement>,
    "className"
  >;

/** Several lines of text: a reason, a note. */
export function TextArea({ label, note, error, labelHidden, className, ...area }: TextAreaProps) {
  return (
    <FieldShell label={label} note={note} error={error} labelHidden={labelHidden} className={className}>
      {(ids) => <textarea rows={3} {...area} {...ids} />}
    </FieldShell>
  );
}

/** A box to tick with its sentence. */
export function CheckField({
  label,
  note,
  className,
  ...input
}: { label: ReactNode; note?: ReactNode; className?: string } & Omit<ComponentProps<"input">, "className">) {
  const id = useId();
  return (
    <div className={`flex items-start gap-3 ${className ?? ""}`}>
      <input
        id={id}
        type="checkbox"
        {...input}
        aria-describedby={note === undefined ? undefined : `${id}-note`}
        className="mt-[3px] h-[14px] w-[14px] flex-none"
      />
      <div>
        <label htmlFor={id}>{label}</label>
        {note !== undefined && (
          <div id={`${id}-note`} className="type-note">
            {note}
          </div>
        )}
      </div>
    </div>
  );
}
