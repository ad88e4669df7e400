/** A shared PC: choose a name, press four to eight digits. The pad is for fingers; the keyboard's digits do the same. */
import type { Me, PersonRef } from "@wavekeep/api/contract";
import { useEffect, useState, type KeyboardEvent } from "react";
import { api } from "../shared/api.ts";
import { Button, TextButton } from "../ui/button.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";

const MOST_DIGITS = 8;
const LEAST_DIGITS = 4;

interface BenchFormProps {
  device: { name: string; labName: string };
  people: readonly PersonRef[];
  onEntered: (me: Me) => void;
}

export function BenchForm({ device, people, onEntered }: BenchFormProps) {
  const [person, setPerson] = useState<PersonRef | null>(null);
  return (
    <>
      <p className="type-note">
        {device.name}, {device.labName}
      </p>
      {person === null ? (
        <Names people={people} onChoose={setPerson} />
      ) : (
        <PinPad key={person.id} person={person} onBack={() => setPerson(null)} onEntered={onEntered} />
      )}
    </>
  );
}

function Names({ people, onChoose }: { people: readonly PersonRef[]; onChoose: (person: PersonRef) => void }) {
  if (people.length === 0)
    return (
      <p className="mt-4">
        Nobody of this lab has set a PIN yet. Sign in with e-mail and password, then set one under My account.
      </p>
    );
  return (
    <ul className="mt-4" aria-label="People of this lab">
      {people.map((person, index) => (
        <li key={person.id} className="border-hairline border-b">
          <button
            type="button"
            className="text-accent block min-h-11 w-full text-left"
            autoFocus={index === 0}
            onClick={() => onChoose(person)}
          >
            {person.name}
          </button>
        </li>
      ))}
    </ul>
  );
}

function PinPad({ person, onBack, onEntered }: { person: PersonRef; onBack: () => void; onEntered: (me: Me) => void }) {
  const [pin, setPin] = useState("");
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<unknown>(null);
  const add = (digit: string) => setPin((old) => (old.length < MOST_DIGITS ? old + digit : old));
  const enter = async () => {
    if (busy || pin.length < LEAST_DIGITS) return;
    setBusy(true);
    setProblem(null);
    try {
      onEntered(await api.post("benchSignIn", {}, { personId: person.id, pin }));
    } catch (error) {
      setProblem(error);
      setPin("");
    } finally {
      setBusy(false);
    }
  };
  const press = (event: KeyboardEvent) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    if (/^\d$/.test(event.key)) add(event.key);
    else if (event.key === "Backspace") setPin((old) => old.slice(0, -1));
    else if (event.key === "Escape") onBack();
    else if (event.key === "Enter" && !(event.target instanceof HTMLButtonElement)) void enter();
    else return;
    event.preventDefault();
  };
  // The pad takes the keyboard as soon as a name is chosen.
  const [pad, setPad] = useState<HTMLDivElement | null>(null);
  useEffect(() => pad?.focus(), [pad]);
  return (
    <div
      ref={setPad}
      role="group"
      aria-label={`PIN of ${person.name}`}
      tabIndex={0}
      onKeyDown={press}
      className="pin-pad mt-4 max-w-[264px]"
    >
      <div className="flex items-baseline justify-between gap-4">
        <p className="strong">{person.name}</p>
        <TextButton onClick={onBack}>someone else</TextButton>
      </div>
      <p aria-live="polite" className="type-head border-graph mt-3 h-10 border-b text-center tracking-[0.4em]">
        <span aria-hidden="true">{"•".repeat(pin.length)}</span>
        <span className="sr-only">
          {pin.length === 0 ? "no digit yet" : `${pin.length} ${pin.length === 1 ? "digit" : "digits"}`}
        </span>
      </p>
      <div className="mt-4 grid grid-cols-3 gap-2">
        {["1", "2", "3", "4", "5", "6", "7", "8", "9"].map((digit) => (
          <Button key={digit} className="pin-key" onClick={() => add(digit)}>
            {digit}
          </Button>
        ))}
        <Button className="pin-key" aria-label="Take back a digit" onClick={() => setPin((old) => old.slice(0, -1))}>
          ←
        </Button>
        <Button className="pin-key" onClick={() => add("0")}>
          0
        </Button>
        <Button
          className="pin-key"
          filled
          busy={busy}
          disabled={pin.length < LEAST_DIGITS}
          onClick={() => void enter()}
        >
          Enter
        </Button>
      </div>
      {problem !== null && <ProblemNote error={problem} className="mt-4" />}
      <p className="type-note mt-4">The PIN opens the bench. Submitting and approving still ask for your password.</p>
    </div>
  );
}
