/** Addresses and their pages. A page's code comes when it is first opened. */
import type { ComponentType } from "react";
import { createBrowserRouter, Navigate, type RouteObject } from "react-router";
import { NotFound, PageFailed } from "./page-failed.tsx";
import { Shell } from "./shell.tsx";

/** A page by its address: `load` brings its module, `pick` takes the page from it. */
function page<Module>(path: string, load: () => Promise<Module>, pick: (module: Module) => ComponentType): RouteObject {
  return { path, lazy: async () => ({ Component: pick(await load()) }) };
}

const newCheck = () => import("../checks/new-check-page.tsx");

const inside: RouteObject[] = [
  { index: true, element: <Navigate to="/today" replace /> },
  page(
    "today",
    () => import("../today/today-page.tsx"),
    (m) => m.TodayPage,
  ),
  page(
    "instruments",
    () => import("../instruments/instruments-page.tsx"),
    (m) => m.InstrumentsPage,
  ),
  page(
    "instruments/new",
    () => import("../instruments/new-instrument-page.tsx"),
    (m) => m.NewInstrumentPage,
  ),
  page(
    "instruments/:instrumentId/edit",
    () => import("../instruments/edit-instrument-page.tsx"),
    (m) => m.EditInstrumentPage,
  ),
  page(
    "instruments/:instrumentId/:tab?",
    () => import("../instruments/instrument-page.tsx"),
    (m) => m.InstrumentPage,
  ),
  page(
    "checks",
    () => import("../checks/checks-page.tsx"),
    (m) => m.ChecksPage,
  ),
  page("checks/new", newCheck, (m) => m.NewCheckPage),
  page("checks/:checkId/edit", newCheck, (m) => m.NewCheckPage),
  page(
    "checks/:checkId",
    () => import("../checks/check-page.tsx"),
    (m) => m.CheckPage,
  ),
  page(
    "sources",
    () => import("../sources/sources-page.tsx"),
    (m) => m.SourcesPage,
  ),
  page(
    "sources/lines",
    () => import("../linelists/line-library-page.tsx"),
    (m) => m.LineLibraryPage,
  ),
  page(
    "sources/:sourceId",
    () => import("../sources/source-page.tsx"),
    (m) => m.SourcePage,
  ),
  page(
    "alerts",
    () => import("../alerts/alerts-page.tsx"),
    (m) => m.AlertsPage,
  ),
  page(
    "impact/:impactReviewId",
    () => import("../impact/impact-review-page.tsx"),
    (m) => m.ImpactReviewPage,
  ),
  page(
    "records",
    () => import("../records/records-page.tsx"),
    (m) => m.RecordsPage,
  ),
  page(
    "settings/:tab?",
    () => import("../people/settings-page.tsx"),
    (m) => m.SettingsPage,
  ),
  { path: "*", Component: NotFound },
];

/** Doors: before anybody is signed in. */
const doors: RouteObject[] = [
  page(
    "/forgotten",
    () => import("../auth/forgotten-page.tsx"),
    (m) => m.ForgottenPage,
  ),
  page(
    "/reset",
    () => import("../auth/reset-page.tsx"),
    (m) => m.ResetPage,
  ),
  page(
    "/invitation/:token",
    () => import("../auth/invitation-page.tsx"),
    (m) => m.InvitationPage,
  ),
];

/** Nothing is shown before the first page: the server sends the ground in its theme. */
const HydrateFallback = () => null;

export const router = createBrowserRouter([
  { HydrateFallback, ErrorBoundary: PageFailed, children: doors },
  {
    path: "/",
    Component: Shell,
    HydrateFallback,
    ErrorBoundary: PageFailed,
    children: [{ ErrorBoundary: PageFailed, children: inside }],
  },
]);
