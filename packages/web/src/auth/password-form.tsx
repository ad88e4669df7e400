import { zodResolver } from "@hookform/resolvers/zod";
import { signInInput, type Me } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import { Link } from "react-router";
import { api } from "../shared/api.ts";
import { Button } from "../ui/button.tsx";
import { Field, PasswordField } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";

interface PasswordFormProps {
  email: string;
  password: string;
  onEntered: (me: Me) => void;
}

export function PasswordForm({ email, password, onEntered }: PasswordFormProps) {
  const [problem, setProblem] = useState<unknown>(null);
  const form = useForm({ resolver: zodResolver(signInInput), defaultValues: { email, password } });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async (input) => {
    setProblem(null);
    try {
      onEntered(await api.post("signIn", {}, input));
    } catch (error) {
      setProblem(error);
      form.setFocus("password");
    }
  });
  return (
    <form onSubmit={(event) => void submit(event)} noValidate>
      <Field
        label="E-mail"
        type="email"
        autoComplete="username"
        inputMode="email"
        autoCapitalize="none"
        spellCheck={false}
        autoFocus={email === ""}
        error={errors.email?.message}
        {...form.register("email")}
      />
      <PasswordField
        className="mt-4"
        label="Password"
        autoComplete="current-password"
        autoFocus={email !== "" && password === ""}
        error={errors.password?.message}
        {...form.register("password")}
      />
      {problem !== null && <ProblemNote error={problem} withFields={false} className="mt-4" />}
      <div className="mt-5 flex items-center justify-between gap-4">
        <Button type="submit" filled busy={isSubmitting}>
          Sign in
        </Button>
        <Link to="/forgotten" className="text-link">
          Forgotten password
        </Link>
      </div>
    </form>
  );
}
