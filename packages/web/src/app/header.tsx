/** Header: name over mercury's lines, lab, find, theme by name, person with role. On a narrow window a Menu holds the rail. */
import { useQuery } from "@tanstack/react-query";
import { Dialog as Radix } from "radix-ui";
import { useState } from "react";
import { Link, NavLink, useNavigate } from "react-router";
import { api, keepCsrfToken } from "../shared/api.ts";
import { openAlertsQuery } from "../shared/queries.ts";
import { mayDo, useMe, type Member } from "../shared/session.ts";
import { MercuryMark } from "../ui/mercury-mark.tsx";
import { Menu, type MenuGroup } from "../ui/menu.tsx";
import { ThemeMenu } from "../ui/theme-menu.tsx";
import { Find } from "./find.tsx";
import { placesOf, roleWord } from "./places.ts";

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

function NarrowMenu({ groups }: { groups: MenuGroup[] }) {
  const [shown, setShown] = useState<"menu" | "find" | null>(null);
  const me = useMe();
  const close = () => setShown(null);
  return (
    <div className="ml-auto flex gap-6 rail:hidden">
      <button type="button" className="text-quiet book:hidden" onClick={() => setShown("find")}>
        Find
      </button>
      <button type="button" aria-haspopup="dialog" onClick={() => setShown("menu")}>
        Menu
      </button>
      <Radix.Root open={shown !== null} onOpenChange={(next) => !next && close()}>
        <Radix.Portal>
          <Radix.Content className="shell-sheet" aria-describedby={undefined}>
            <div className="flex items-baseline justify-between">
              <Radix.Title className="type-label">
                {shown === "find" ? "Find" : `${me.lab.name}${me.lab.isDemo ? ", demo" : ""}`}
              </Radix.Title>
              <Radix.Close className="text-accent">Close</Radix.Close>
            </div>
            {shown === "find" ? (
              <Find autoFocus onDone={close} className="mt-4" />
            ) : (
              <>
                <nav aria-label="Pages" className="mt-3">
                  <RailLinks onFollow={close} />
                </nav>
                <div className="border-hairline mt-4 border-t pt-3">
                  <ThemeMenuPlain />
                </div>
                <div className="border-hairline mt-3 border-t pt-3">
                  <p className="text-quiet py-2">{`${me.person.name}, ${roleWord(me)}`}</p>
                  {groups.map((group, index) => (
                    <div key={group.label ?? index}>
                      {group.label !== undefined && <p className="type-label pt-2">{group.label}</p>}
                      {group.items.map((item) => (
                        <button
                          key={item.key}
                          type="button"
                          className="text-accent block min-h-11 w-full text-left"
                          onClick={() => {
                            close();
                            item.onChoose();
                          }}
                        >
                          {item.label}
                        </button>
                      ))}
                    </div>
                  ))}
                </div>
              </>
            )}
          </Radix.Content>
        </Radix.Portal>
      </Radix.Root>
    </div>
  );
}

function ThemeMenuPlain() {
  return (
    <div className="py-2">
      <ThemeMenu className="text-quiet" align="left" />
    </div>
  );
}

/** The rail's entries, in the rail and in the menu. */
export function RailLinks({ onFollow }: { onFollow?: () => void }) {
  const me = useMe();
  const alerts = useQuery({ ...openAlertsQuery, enabled: mayDo(me, "alert.read") });
  return (
    <ul>
      {placesOf(me).map((place) => (
        <li key={place.to}>
          <NavLink to={place.to} className="rail-link" onClick={onFollow}>
            {place.label}
            {place.to === "/alerts" && alerts.data !== undefined && alerts.data !== "0" && (
              <>
                {" "}
                <span className="type-note ml-1">
                  {alerts.data}
                  <span className="sr-only"> open</span>
                </span>
              </>
            )}
          </NavLink>
        </li>
      ))}
    </ul>
  );
}

/** The rail: a ruler of pages, a tick each at the window's edge. */
export function Rail() {
  return (
    <nav aria-label="Pages" className="shell-rail no-print">
      <RailLinks />
    </nav>
  );
}
