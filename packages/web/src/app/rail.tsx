import { useQuery } from "@tanstack/react-query";
import { NavLink } from "react-router";
import { openAlertsQuery } from "../shared/queries.ts";
import { mayDo, useMe } from "../shared/session.ts";
import { placesOf } from "./places.ts";

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
