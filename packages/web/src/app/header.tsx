/** Header: name over mercury's lines, lab, find, theme by name, person with role. On a narrow window a Menu holds the rail. */
import { lazy, Suspense, useState } from "react";
import { Link, useNavigate } from "react-router";
import { api, keepCsrfToken } from "../shared/api.ts";
import { useMe, type Member } from "../shared/session.ts";
import { MercuryMark } from "../ui/mercury-mark.tsx";
import { Menu, type MenuGroup } from "../ui/menu.tsx";
import { ThemeMenu } from "../ui/theme-menu.tsx";
import { Find } from "./find.tsx";
import { roleWord } from "./places.ts";

const NarrowSheet = lazy(async () => ({ default: (await import("./narrow-sheet.tsx")).NarrowSheet }));

/** Leaves for good: the page is loaded anew, so that nothing of this person stays in memory. */
const reload = () => window.location.assign("/today");

function usePersonGroups(me: Member): MenuGroup[] {
  const navigate = useNavigate();
  const otherLabs = me.labs.filter((lab) => lab.id !== me.lab.id);
  const groups: MenuGroup[] = [];
  if (otherLabs.length > 0) {
    groups.push({
      label: "Work in another lab",
      items: otherLabs.map((lab) => ({
        key: lab.id,
        label: lab.isDemo ? `${lab.name} (demo)` : lab.name,
        onChoose: () =>
          void api.put("switchLab", {}, { labId: lab.id }).then((next) => {
            keepCsrfToken(next);
            reload();
          }),
      })),
    });
  }
  groups.push({ items: [{ key: "me", label: "My account", onChoose: () => void navigate("/settings/me") }] });
  groups.push({
    items: [
      ...(me.bench === null
        ? []
        : [{ key: "lock", label: "Lock this PC", onChoose: () => void api.delete("benchLock").finally(reload) }]),
      { key: "out", label: "Sign out", onChoose: () => void api.delete("signOut").finally(reload) },
      {
        key: "everywhere",
        label: "Sign out everywhere",
        onChoose: () => void api.delete("signOutEverywhere").finally(reload),
      },
    ],
  });
  return groups;
}

export function Header() {
  const me = useMe();
  const groups = usePersonGroups(me);
  return (
    <header className="shell-header no-print">
      <div className="shell-name">
        <Link to="/today" className="type-lead strong">
          Wavekeep
        </Link>
        {me.lab.isDemo && <span className="type-note ml-2 rail:hidden">demo</span>}
        <MercuryMark className="absolute bottom-0 left-0" />
      </div>
      <div className="hidden min-w-0 items-baseline gap-2 book:flex">
        <span className="truncate">{me.lab.name}</span>
        {me.lab.isDemo && <span className="type-note hidden rail:inline">demo</span>}
      </div>
      <Find className="shell-find" />
      <div className="ml-auto hidden items-center gap-6 rail:flex">
        <ThemeMenu />
        <Menu label={`${me.person.name}, ${roleWord(me)}`} groups={groups} />
      </div>
      <NarrowMenu groups={groups} />
    </header>
  );
}

/** On a narrow window: *Find* and *Menu*, each a sheet over the page. */
function NarrowMenu({ groups }: { groups: MenuGroup[] }) {
  const [shown, setShown] = useState<"menu" | "find" | null>(null);
  return (
    <div className="ml-auto flex gap-6 rail:hidden">
      <button type="button" aria-haspopup="dialog" className="text-quiet book:hidden" onClick={() => setShown("find")}>
        Find
      </button>
      <button type="button" aria-haspopup="dialog" onClick={() => setShown("menu")}>
        Menu
      </button>
      {shown !== null && (
        <Suspense>
          <NarrowSheet shows={shown} groups={groups} onClose={() => setShown(null)} />
        </Suspense>
      )}
    </div>
  );
}
