/** Signed in, but in no lab: choose one, or be told what to do. */
import type { Me } from "@wavekeep/api/contract";
import { useState } from "react";
import { api } from "../shared/api.ts";
import { Button, TextButton } from "../ui/button.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Door } from "./door.tsx";
import { useEnter } from "./use-enter.ts";

export function ChooseLab({ me }: { me: Me }) {
  const enter = useEnter();
  const [problem, setProblem] = useState<unknown>(null);
  return (
    <Door title={me.labs.length === 0 ? "No lab yet" : "Which lab?"}>
      {me.labs.length === 0 && (
        <p>{me.person?.name} belongs to no lab at present. A lab manager can invite you; the link comes by mail.</p>
      )}
      <ul>
        {me.labs.map((lab) => (
          <li key={lab.id} className="border-hairline border-b">
            <button
              type="button"
              className="text-accent block min-h-11 w-full text-left"
              onClick={() => void api.put("switchLab", {}, { labId: lab.id }).then(enter, setProblem)}
            >
              {lab.name}
              {lab.isDemo && <span className="type-note"> demo</span>}
            </button>
          </li>
        ))}
      </ul>
      {problem !== null && <ProblemNote error={problem} className="mt-4" />}
      <div className="mt-6 flex items-center gap-5">
        {me.labs.length === 0 && <Button onClick={() => window.location.reload()}>Look again</Button>}
        <TextButton onClick={() => void api.delete("signOut").finally(() => window.location.assign("/"))}>
          Sign out
        </TextButton>
      </div>
    </Door>
  );
}
