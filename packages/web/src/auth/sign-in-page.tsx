/** Sign in: by e-mail and password, or on a shared PC by name and PIN. */
import { useQuery } from "@tanstack/react-query";
import type { Me } from "@wavekeep/api/contract";
import { lazy, Suspense, useState } from "react";
import { api } from "../shared/api.ts";
import { TextButton } from "../ui/button.tsx";
import { Door } from "./door.tsx";
import { useEnter } from "./use-enter.ts";

const PasswordForm = lazy(async () => ({ default: (await import("./password-form.tsx")).PasswordForm }));
const BenchForm = lazy(async () => ({ default: (await import("./bench-form.tsx")).BenchForm }));

interface SignInPageProps {
  me: Me;
  /** Whose page waits below, when a session ended by itself. */
  lastPerson: { name: string; email: string } | null;
  /** That session was one of a shared PC. */
  wasAtBench: boolean;
}

/** Why the session ended, as far as this device can tell. */
function whyEnded(isBench: boolean, wasAtBench: boolean): string {
  if (isBench) return "Locked at rest.";
  return wasAtBench
    ? "Bench mode on this PC was ended, and with it you were signed out."
    : "You were signed out at rest.";
}

export function SignInPage({ me, lastPerson, wasAtBench }: SignInPageProps) {
  const bench = useQuery({
    queryKey: ["bench"],
    queryFn: ({ signal }) => api.get("readBench", {}, undefined, { signal }),
    staleTime: 0,
    retry: false,
  });
  const [byPassword, setByPassword] = useState(false);
  const enter = useEnter();
  const [picked, setPicked] = useState<Me["demoPeople"][number] | null>(null);
  const device = bench.data?.device ?? null;
  const asBench = device !== null && !byPassword;
  const beside =
    me.isDemoServer && me.demoPeople.length > 0 && !asBench ? (
      <DemoPeople people={me.demoPeople} onPick={setPicked} />
    ) : undefined;
  return (
    <Door title={asBench ? "Who is at the bench?" : "Sign in"} beside={beside}>
      {lastPerson !== null && !bench.isPending && (
        <p className="mb-4">
          {whyEnded(device !== null, wasAtBench && bench.isSuccess)} The page waits as it was, with what was typed, for{" "}
          {lastPerson.name}.
        </p>
      )}
      <Suspense>
        {bench.isPending ? null : asBench ? (
          <BenchForm device={device} people={bench.data?.people ?? []} onEntered={enter} />
        ) : (
          <PasswordForm
            key={picked?.email ?? ""}
            email={picked?.email ?? lastPerson?.email ?? ""}
            password={picked?.password ?? ""}
            onEntered={enter}
          />
        )}
      </Suspense>
      {device !== null && (
        <p className="type-note mt-6">
          <TextButton onClick={() => setByPassword(!byPassword)}>
            {asBench ? "Sign in with e-mail and password" : "Sign in by name and PIN"}
          </TextButton>
        </p>
      )}
      {!asBench && (
        <p className="type-note mt-8">
          People come in by invitation from their lab manager. {minutes(me.idleSeconds)} at rest and you sign in again;
          nothing typed is lost.
        </p>
      )}
    </Door>
  );
}

const NUMBERS: Record<number, string> = { 2: "Two", 5: "Five", 10: "Ten", 15: "Fifteen", 20: "Twenty", 30: "Thirty" };

function minutes(seconds: number): string {
  const count = Math.max(1, Math.round(seconds / 60));
  return `${NUMBERS[count] ?? count} ${count === 1 ? "minute" : "minutes"}`;
}

/** On a demo server the invented people stand beside the form, plainly; a press fills it in. */
function DemoPeople({
  people,
  onPick,
}: {
  people: Me["demoPeople"];
  onPick: (person: Me["demoPeople"][number]) => void;
}) {
  return (
    <section aria-labelledby="demo-people">
      <h2 id="demo-people" className="strong">
        Demo people
      </h2>
      <p className="type-note mt-1">This server holds an invented lab. Choose one of its people, then sign in.</p>
      <ul className="mt-3">
        {people.map((person) => (
          <li key={person.email} className="border-hairline border-b">
            <button type="button" className="block w-full py-2 text-left" onClick={() => onPick(person)}>
              <span className="text-accent">{person.name}</span>
              {person.role !== "" && <span className="type-note">, {person.role}</span>}
              <span className="type-note block">
                {person.email} · {person.password}
              </span>
            </button>
          </li>
        ))}
      </ul>
    </section>
  );
}
