import { Outlet } from "react-router";
import { isMember, MemberProvider, useSession } from "../shared/session.ts";

export function Shell() {
  const session = useSession();
  if (!isMember(session.data)) return null;
  return (
    <MemberProvider value={session.data}>
      <main className="page-frame">
        <Outlet />
      </main>
    </MemberProvider>
  );
}
