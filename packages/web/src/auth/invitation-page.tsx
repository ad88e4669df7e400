/** An invitation: what it offers, then a name and a password, or the password one has already. */
import { zodResolver } from "@hookform/resolvers/zod";
import { useQuery } from "@tanstack/react-query";
import { acceptInvitationInput, password } from "@wavekeep/api/contract";
import { useState } from "react";
import { useForm } from "react-hook-form";
import { useNavigate, useParams } from "react-router";
import { z } from "zod";
import { api, type RouteReply } from "../shared/api.ts";
import { useSession } from "../shared/session.ts";
import { Button, LinkButton } from "../ui/button.tsx";
import { Field, PasswordField } from "../ui/field.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Door } from "./door.tsx";
import { useEnter } from "./use-enter.ts";

const ROLE_WORDS = { manager: "lab manager", technician: "technician", auditor: "auditor" } as const;

export function InvitationPage() {
  const token = useParams()["token"] ?? "";
  // The session brings the token that the acceptance must carry.
  useSession();
  const invitation = useQuery({
    queryKey: ["invitation", token],
    queryFn: ({ signal }) => api.get("readInvitation", { token }, undefined, { signal }),
    retry: false,
    staleTime: Infinity,
  });
  if (invitation.isError) {
    return (
      <Door title="Invitation">
        <ProblemNote error={invitation.error} />
        <LinkButton to="/" className="mt-6">
          Sign in
        </LinkButton>
      </Door>
    );
  }
  return (
    <Door title="Invitation">
      {invitation.data === undefined ? (
        <p role="status">Reading the invitation.</p>
      ) : (
        <Accept token={token} invitation={invitation.data} />
      )}
    </Door>
  );
}

function Accept({ token, invitation }: { token: string; invitation: RouteReply<"readInvitation"> }) {
  const enter = useEnter();
  const navigate = useNavigate();
  const [problem, setProblem] = useState<unknown>(null);
  // A new person chooses a password, which has rules; a known one only proves who they are.
  const form = useForm({
    resolver: zodResolver(
      invitation.knownPerson
        ? acceptInvitationInput.extend({ name: z.string() })
        : acceptInvitationInput.extend({ password }),
    ),
    defaultValues: { name: "", password: "" },
  });
  const { errors, isSubmitting } = form.formState;
  const submit = form.handleSubmit(async (input) => {
    setProblem(null);
    try {
      // A known person keeps their name; the contract asks for one all the same.
      enter(
        await api.post(
          "acceptInvitation",
          { token },
          { name: invitation.knownPerson ? invitation.email : input.name, password: input.password },
        ),
      );
      await navigate("/today");
    } catch (error) {
      setProblem(error);
    }
  });
  return (
    <form onSubmit={(event) => void submit(event)} noValidate>
      <p>
        {invitation.invitedBy} invites {invitation.email} to <b>{invitation.labName}</b> as{" "}
        {invitation.roles.map((role) => ROLE_WORDS[role]).join(" and ")}.
      </p>
      {!invitation.knownPerson && (
        <Field
          className="mt-5"
          label="Your name, as it is printed on records"
          autoComplete="name"
          autoFocus
          error={errors.name?.message}
          {...form.register("name")}
        />
      )}
      <PasswordField
        className="mt-4"
        label={invitation.knownPerson ? "Your password" : "A password"}
        autoComplete={invitation.knownPerson ? "current-password" : "new-password"}
        note={
          invitation.knownPerson
            ? "You have signed in to Wavekeep before: the password you use there."
            : "At least 10 characters; a few plain words make a good one."
        }
        error={errors.password?.message}
        {...form.register("password")}
      />
      {problem !== null && <ProblemNote error={problem} className="mt-4" />}
      <div className="mt-5">
        <Button type="submit" filled busy={isSubmitting}>
          Accept and sign in
        </Button>
      </div>
    </form>
  );
}
