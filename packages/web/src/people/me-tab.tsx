/** One's own account: printed name, password, PIN, theme, sessions. */
import { zodResolver } from "@hookform/resolvers/zod";
import { changeMeInput, changePasswordInput, changePinInput } from "@wavekeep/api/contract";
import type { ReactNode } from "react";
import { useForm } from "react-hook-form";
import { api, type RouteBody } from "../shared/api.ts";
import { useKeepFromLeaving } from "../shared/form.tsx";
import { useMe } from "../shared/session.ts";
import { chooseTheme, themeNames, themeWords, useTheme } from "../shared/theme.ts";
import { useChange } from "../shared/use-change.ts";
import { Button } from "../ui/button.tsx";
import { Field, PasswordField } from "../ui/field.tsx";
import { Section } from "../ui/page.tsx";
import { Switches } from "../ui/parts.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";

export function MeTab() {
  const me = useMe();
  const theme = useTheme();
  return (
    <>
      <NameForm name={me.person.name} email={me.person.email} />
      <PasswordChange />
      <PinForm hasPin={me.person.hasPin} />
      <Section title="Theme" note="Remembered on this device.">
        <Switches
          label="Theme"
          value={theme}
          onChange={chooseTheme}
          choices={themeNames.map((name) => ({ value: name, label: themeWords[name] }))}
        />
        <p className="type-note mt-3 max-w-[480px]">
          Dark room keeps the eye’s adaptation: near-black and dim. It does not make a screen safe for an open detector;
          choose a hue away from the band being measured.
        </p>
      </Section>
      <Section title="Sessions" note="A lost phone, a PC left open.">
        <Button onClick={() => void api.delete("signOutEverywhere").finally(() => window.location.assign("/"))}>
          Sign out everywhere
        </Button>
      </Section>
    </>
  );
}

function FormSection({
  title,
  note,
  children,
  onSubmit,
  busy,
  label,
  error,
  isDone,
}: {
  title: string;
  note: string;
  children: ReactNode;
  onSubmit: () => void;
  busy: boolean;
  label: string;
  error: Error | null;
  isDone: boolean;
}) {
  return (
    <Section title={title} note={note}>
      <form
        className="max-w-[340px]"
        noValidate
        onSubmit={(event) => {
          event.preventDefault();
          onSubmit();
        }}
      >
        {children}
        {error !== null && <ProblemNote error={error} className="mt-4" />}
        <div className="mt-4 flex items-center gap-4">
          <Button type="submit" busy={busy}>
            {label}
          </Button>
          {isDone && <span role="status">Kept.</span>}
        </div>
      </form>
    </Section>
  );
}

function NameForm({ name, email }: { name: string; email: string }) {
  const form = useForm({ resolver: zodResolver(changeMeInput), defaultValues: { name } });
  const change = useChange(
    (input: RouteBody<"changeMe">) => api.put("changeMe", {}, input),
    (_, kept) => form.reset(kept),
  );
  useKeepFromLeaving(form.formState.isDirty);
  return (
    <FormSection
      title="Name"
      note="As it is printed beside your signature. Records keep the name they were signed with."
      label="Keep the name"
      busy={change.isPending}
      error={change.error}
      isDone={change.isSuccess}
      onSubmit={() => void form.handleSubmit((input) => change.mutate(input))()}
    >
      <Field
        label="Printed name"
        autoComplete="name"
        error={form.formState.errors.name?.message}
        note={email}
        {...form.register("name")}
      />
    </FormSection>
  );
}

function PasswordChange() {
  const form = useForm({ resolver: zodResolver(changePasswordInput), defaultValues: { current: "", password: "" } });
  const change = useChange(
    (input: RouteBody<"changePassword">) => api.put("changePassword", {}, input),
    () => form.reset(),
  );
  const { errors, isDirty } = form.formState;
  useKeepFromLeaving(isDirty);
  return (
    <FormSection
      title="Password"
      note="It signs what you make and approve."
      label="Change the password"
      busy={change.isPending}
      error={change.error}
      isDone={change.isSuccess}
      onSubmit={() => void form.handleSubmit((input) => change.mutate(input))()}
    >
      <PasswordField
        label="Present password"
        autoComplete="current-password"
        error={errors.current?.message}
        {...form.register("current")}
      />
      <PasswordField
        className="mt-4"
        label="New password"
        autoComplete="new-password"
        note="At least 10 characters; a few plain words make a good one."
        error={errors.password?.message}
        {...form.register("password")}
      />
    </FormSection>
  );
}

function PinForm({ hasPin }: { hasPin: boolean }) {
  const form = useForm({ resolver: zodResolver(changePinInput), defaultValues: { current: "", pin: "" } });
  const change = useChange(
    (input: RouteBody<"changePin">) => api.put("changePin", {}, input),
    () => form.reset(),
  );
  const { errors, isDirty } = form.formState;
  useKeepFromLeaving(isDirty);
  return (
    <FormSection
      title="PIN"
      note="Opens a shared PC at the bench by your name; it never signs."
      label={hasPin ? "Change the PIN" : "Set a PIN"}
      busy={change.isPending}
      error={change.error}
      isDone={change.isSuccess}
      onSubmit={() => void form.handleSubmit((input) => change.mutate(input))()}
    >
      <PasswordField
        label="Present password"
        autoComplete="current-password"
        error={errors.current?.message}
        {...form.register("current")}
      />
      <PasswordField
        className="mt-4"
        label="New PIN"
        autoComplete="off"
        inputMode="numeric"
        note="4 to 8 digits."
        error={errors.pin?.message}
        {...form.register("pin")}
      />
    </FormSection>
  );
}
