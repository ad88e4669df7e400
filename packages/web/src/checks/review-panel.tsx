/** Review: four things to see, each with the place where it stands, before the second signature can be given. */
import type { Check } from "@wavekeep/api/contract";
import { returnInput } from "@wavekeep/api/contract";
import { useQueryClient } from "@tanstack/react-query";
import { useState } from "react";
import { useForm } from "react-hook-form";
import type { z } from "zod";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, rulesOf } from "../shared/form.tsx";
import { calledWords, counted } from "../shared/words.ts";
import { Button, CheckField, formatLimit, PasswordDialog, TextButton } from "../ui/index.ts";
import { approveCheck, useReturnCheck } from "./queries.ts";
import { settingsWords } from "./check-facts.tsx";
import { leftOutSentence } from "./verdict-sentence.ts";

const things = ["attempts", "leftOut", "settings", "tolerance"] as const;
type Thing = (typeof things)[number];

function thingWords(check: Check, thing: Thing): { label: string; to: string } {
  const abandoned = check.attempts.filter((attempt) => attempt.abandoned).length;
  switch (thing) {
    case "attempts":
      return {
        label: `${counted(check.attempts.length, "attempt")}${abandoned > 0 ? `, ${abandoned} abandoned` : ""}`,
        to: "#attempts",
      };
    case "leftOut":
      return {
        label: `Left out: ${check.analysis === null ? "nothing" : leftOutSentence(check.analysis)}`,
        to: "#lines",
      };
    case "settings":
      return {
        label: `Settings: ${settingsWords({ ...check, tolerance: { ...check.tolerance, changedSince: false } })}`,
        to: "#settings",
      };
    case "tolerance": {
      const limits = [...new Set(check.tolerance.segments.map((segment) => segment.toleranceNm))]
        .map((value) => formatLimit(value))
        .join(", ");
      return {
        label: `Tolerance ${limits}${check.tolerance.changedSince ? ", changed since" : ", not changed since"}`,
        to: "#settings",
      };
    }
  }
}

export function ReviewPanel({ check }: { check: Check }) {
  const [seen, setSeen] = useState<ReadonlySet<Thing>>(new Set());
  const [doing, setDoing] = useState<"approve" | "return" | null>(null);
  const allSeen = seen.size === things.length;
  if (!check.may.approve && !check.may.return) {
    return (
      <div className="no-print">
        <p className="type-lead text-quiet">Awaiting approval</p>
        {check.may.approveRefusal !== null && <p className="type-note mt-1">{check.may.approveRefusal}</p>}
      </div>
    );
  }
  return (
    <div className="no-print">
      <p className="type-lead text-quiet">Awaiting approval</p>
      {check.may.approve && (
        <fieldset className="mt-2 grid gap-2">
          <legend className="type-note mb-2">
            Tick each when you have seen it; then the signature can be given. It asks for your password and locks the
            record.
          </legend>
          {things.map((thing) => {
            const { label, to } = thingWords(check, thing);
            return (
              <div key={thing} className="flex items-baseline justify-between gap-3">
                <CheckField
                  label={label}
                  checked={seen.has(thing)}
                  onChange={(event) => {
                    const next = new Set(seen);
                    if (event.target.checked) next.add(thing);
                    else next.delete(thing);
                    setSeen(next);
                  }}
                />
                <a href={to} className="text-link type-note flex-none" aria-label={`See it: ${label}`}>
                  see it
                </a>
              </div>
            );
          })}
        </fieldset>
      )}
      {check.may.approveRefusal !== null && <p className="type-note mt-2">{check.may.approveRefusal}</p>}
      <div className="mt-4 flex flex-wrap items-center gap-5">
        {check.may.approve && (
          <Button filled disabled={!allSeen} onClick={() => setDoing("approve")}>
            Approve and sign
          </Button>
        )}
        {check.may.return && <TextButton onClick={() => setDoing("return")}>Send back</TextButton>}
      </div>
      {check.may.approve && !allSeen && (
        <p className="type-note mt-2">{counted(things.length - seen.size, "thing")} still to see.</p>
      )}
      <ApproveDialog check={check} open={doing === "approve"} onClose={() => setDoing(null)} />
      {doing === "return" && <ReturnDialog check={check} onClose={() => setDoing(null)} />}
    </div>
  );
}

function ApproveDialog({ check, open, onClose }: { check: Check; open: boolean; onClose: () => void }) {
  const client = useQueryClient();
  return (
    <PasswordDialog
      open={open}
      onClose={onClose}
      title={`Approve ${check.summary.number}`}
      meaning="reviewed and approved"
      lead={`The record of ${calledWords(check.summary)} is locked, and its report is made.`}
      confirmLabel="Approve and sign"
      onConfirm={async (password) => {
        await approveCheck(
          check.summary.id,
          {
            password,
            revision: check.revision,
            seen: { attempts: true, leftOut: true, settings: true, tolerance: true },
          },
          crypto.randomUUID(),
        );
        await client.invalidateQueries();
      }}
    />
  );
}

function ReturnDialog({ check, onClose }: { check: Check; onClose: () => void }) {
  const send = useReturnCheck(check.summary.id, onClose);
  const shape = returnInput.omit({ revision: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { comment: "" },
  });
  return (
    <DialogForm
      title={`Send ${check.summary.number} back`}
      lead={`${check.summary.begunBy.name} can change it and submit it again; what was submitted stays on record.`}
      confirmLabel="Send back"
      form={form}
      onClose={onClose}
      busy={send.isPending}
      error={send.error}
      onSubmit={(values) => send.mutate({ ...values, revision: check.revision })}
    >
      <FormArea name="comment" label="What should be looked at" />
    </DialogForm>
  );
}
