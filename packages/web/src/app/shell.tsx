/**
 * The frame around every page, and who may see it. A session that ends by itself leaves the page where it is, covered:
 * the same person signs in again and goes on with what was typed; another person starts afresh.
 */
import { useQueryClient } from "@tanstack/react-query";
import type { Me } from "@wavekeep/api/contract";
import { lazy, Suspense, useEffect, useRef, useState } from "react";
import { Outlet, ScrollRestoration, useLocation } from "react-router";
import { api, onSessionLost } from "../shared/api.ts";
import {
  adoptSession,
  isMember,
  memberKey,
  MemberProvider,
  sessionQuery,
  useSession,
  type Member,
} from "../shared/session.ts";
import { Button } from "../ui/button.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";
import { Header } from "./header.tsx";
import { Rail } from "./rail.tsx";
import { useIdle } from "./use-idle.ts";

const SignIn = lazy(async () => ({ default: (await import("../auth/sign-in-page.tsx")).SignInPage }));
const ChooseLab = lazy(async () => ({ default: (await import("../auth/choose-lab.tsx")).ChooseLab }));

/** The session as it is once nobody holds it. */
const withoutPerson = (me: Me): Me => ({ ...me, person: null, lab: null, roles: [], ownedInstrumentIds: [], labs: [] });

export function Shell() {
  const session = useSession();
  const client = useQueryClient();
  const [kept, setKept] = useState<Member | null>(null);
  const me = session.data;
  if (isMember(me) && kept !== me) setKept(me);

  useEffect(() => {
    onSessionLost((_, now) => {
      if (now === null) {
        client.setQueryData<Me>(sessionQuery.queryKey, (old) => old && withoutPerson(old));
        void client.invalidateQueries({ queryKey: sessionQuery.queryKey });
      } else client.setQueryData<Me>(sessionQuery.queryKey, adoptSession(client, now));
    });
    return () => onSessionLost(() => undefined);
  }, [client]);

  useIdle(kept?.bench?.lockAfterSeconds ?? kept?.idleSeconds ?? 0, isMember(me), () => {
    const bench = kept?.bench !== null && kept?.bench !== undefined;
    client.setQueryData<Me>(sessionQuery.queryKey, (old) => old && withoutPerson(old));
    void (bench ? api.delete("benchLock") : api.delete("signOut"))
      .catch(() => undefined)
      .finally(() => void client.invalidateQueries({ queryKey: sessionQuery.queryKey }));
  });

  if (kept === null) return <BeforeSignIn me={me} error={session.error} retry={() => void session.refetch()} />;
  const isLocked = !isMember(me);
  return (
    <>
      <MemberProvider value={kept}>
        <Frame key={memberKey(kept)} isLocked={isLocked} />
      </MemberProvider>
      {isLocked && (
        <div className="lock-cover">
          <Suspense>
            {me !== undefined && <SignIn me={me} lastPerson={kept.person} wasAtBench={kept.bench !== null} />}
          </Suspense>
        </div>
      )}
      <ScrollRestoration />
    </>
  );
}

function BeforeSignIn({ me, error, retry }: { me: Me | undefined; error: Error | null; retry: () => void }) {
  if (me === undefined) {
    return (
      <main className="page-frame" aria-busy={error === null}>
        {error !== null && (
          <>
            <ProblemNote error={error} />
            <Button filled className="mt-4" onClick={retry}>
              Try again
            </Button>
          </>
        )}
      </main>
    );
  }
  return (
    <Suspense>
      {me.person === null ? <SignIn me={me} lastPerson={null} wasAtBench={false} /> : <ChooseLab me={me} />}
    </Suspense>
  );
}

function Frame({ isLocked }: { isLocked: boolean }) {
  const { pathname } = useLocation();
  const main = useRef<HTMLElement>(null);
  const before = useRef(pathname);
  // A new page begins at its start for those who listen, as it does for those who look.
  useEffect(() => {
    if (before.current !== pathname) main.current?.focus({ preventScroll: true });
    before.current = pathname;
  }, [pathname]);
  return (
    <div className="shell" inert={isLocked}>
      <a href="#page" className="skip-link">
        To the page
      </a>
      <Header />
      <Rail />
      <main id="page" ref={main} tabIndex={-1} className="page-frame">
        <Outlet />
      </main>
    </div>
  );
}
