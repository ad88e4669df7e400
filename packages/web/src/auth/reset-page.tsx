/** A new password, by the link that was mailed. */
import { zodResolver } from "@hookform/resolvers/zod";
import { resetPasswordInput } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import { Link, useSearchParams } from "react-router";
import { api } from "../shared/api.ts";
import { useSession } from "../shared/session.ts";
import { Button } from "../ui/button.tsx";
import { PasswordField } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Door } from "./door.tsx";

export function ResetPage() {
  const [params] = useSearchParams();
  const session = useSession();
  const [isDone, setDone] = useState(false);
  const [problem, setProblem] = useState<unknown>(null);
  const form = useForm({
    resolver: zodResolver(resetPasswordInput),
    defaultValues: { token: params.get("token") ?? "", password: "" },
  });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async (input) => {
    setProblem(null);
    try {
      await api.post("resetPassword", {}, input);
      setDone(true);
    } catch (error) {
      setProblem(error);
    }
  });
  if (isDone) {
    return (
      <Door title="Password set">
        <p role="status">The new password is in force. You were signed out on every device.</p>
        <p className="mt-6">
          <Link to="/" className="text-link">
            Sign in
          </Link>
        </p>
      </Door>
    );
  }
  return (
    <Door title="A new password">
      <form onSubmit={(event) => void submit(event)} noValidate>
        <PasswordField
          label="New password"
          autoComplete="new-password"
          autoFocus
          note="At least 10 characters; a few plain words make a good one."
          error={errors.password?.message}
          {...form.register("password")}
        />
        {errors.token !== undefined && (
          <p role="alert" className="caution mt-4">
            The link is not whole. Open it from the mail once more, or{" "}
            <Link to="/forgotten" className="text-link">
              ask for another
            </Link>
            .
          </p>
        )}
        {problem !== null && <ProblemNote error={problem} className="mt-4" />}
        <div className="mt-5">
          <Button type="submit" filled busy={isSubmitting} disabled={session.data === undefined}>
            Set the password
          </Button>
        </div>
      </form>
    </Door>
  );
}
