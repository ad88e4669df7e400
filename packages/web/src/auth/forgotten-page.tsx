/** Forgotten password: a link by mail. The answer is the same whether the address is known or not. */
import { zodResolver } from "@hookform/resolvers/zod";
import { forgottenPasswordInput } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import { Link } from "react-router";
import { api } from "../shared/api.ts";
import { useSession } from "../shared/session.ts";
import { Button, FileLink } from "../ui/button.tsx";
import { Field } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Door } from "./door.tsx";

export function ForgottenPage() {
  const session = useSession();
  const [sentTo, setSentTo] = useState<string | null>(null);
  const [problem, setProblem] = useState<unknown>(null);
  const form = useForm({ resolver: zodResolver(forgottenPasswordInput), defaultValues: { email: "" } });
  const submit = form.handleSubmit(async (input) => {
    setProblem(null);
    try {
      await api.post("forgetPassword", {}, input);
      setSentTo(input.email);
    } catch (error) {
      setProblem(error);
    }
  });
  if (sentTo !== null) {
    return (
      <Door title="Look at your mail">
        <p role="status">If {sentTo} is known here, a link is on its way. It works once, for a short time.</p>
        {session.data?.isDemoServer === true && (
          <p className="type-note mt-3">
            This is a demo server: <FileLink href="/dev/mail">read its mail here</FileLink>.
          </p>
        )}
        <p className="mt-6">
          <Link to="/" className="text-link">
            Back to sign-in
          </Link>
        </p>
      </Door>
    );
  }
  return (
    <Door title="Forgotten password">
      <form onSubmit={(event) => void submit(event)} noValidate>
        <Field
          label="E-mail"
          type="email"
          autoComplete="username"
          autoCapitalize="none"
          autoFocus
          note="A link to set a new password is sent there."
          error={form.formState.errors.email?.message}
          {...form.register("email")}
        />
        {problem !== null && <ProblemNote error={problem} withFields={false} className="mt-4" />}
        <div className="mt-5 flex items-center justify-between gap-4">
          <Button type="submit" filled busy={form.formState.isSubmitting} disabled={session.data === undefined}>
            Send the link
          </Button>
          <Link to="/" className="text-link">
            Back
          </Link>
        </div>
      </form>
    </Door>
  );
}
