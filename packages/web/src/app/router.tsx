/** Addresses and their pages. A page's code comes when it is first opened. */
import { createBrowserRouter, Navigate, type RouteObject } from "react-router";
import type { ComponentType } from "react";
import { PageFailed, NotFound } from "./page-failed.tsx";
import { Shell } from "./shell.tsx";

const modules = import.meta.glob<Record<string, ComponentType>>("../*/*-page.tsx");

const lazyPage = (file: string, name: string): Pick<RouteObject, "lazy"> => ({
  lazy: async () => {
    const page = await modules[`../${file}.tsx`]?.();
    const Component = page?.[name];
    if (Component === undefined) throw new Error(`${file} has no ${name}.`);
    return { Component };
  },
});

const page = (path: string, file: string, name: string): RouteObject => ({ path, ...lazyPage(file, name) });

const inside: RouteObject[] = [
  { index: true, element: <Navigate to="/today" replace /> },
  page("today", "today/today-page", "TodayPage"),
  page("instruments", "instruments/instruments-page", "InstrumentsPage"),
  page("instruments/new", "instruments/new-instrument-page", "NewInstrumentPage"),
  page("instruments/:instrumentId/edit", "instruments/edit-instrument-page", "EditInstrumentPage"),
  page("instruments/:instrumentId/:tab?", "instruments/instrument-page", "InstrumentPage"),
  page("checks", "checks/checks-page", "ChecksPage"),
  page("checks/new", "checks/new-check-page", "NewCheckPage"),
  page("checks/:checkId/edit", "checks/new-check-page", "NewCheckPage"),
  page("checks/:checkId", "checks/check-page", "CheckPage"),
  page("sources", "sources/sources-page", "SourcesPage"),
  page("sources/lines", "linelists/line-library-page", "LineLibraryPage"),
  page("sources/:sourceId", "sources/source-page", "SourcePage"),
  page("alerts", "alerts/alerts-page", "AlertsPage"),
  page("impact/:impactReviewId", "impact/impact-review-page", "ImpactReviewPage"),
  page("records", "records/records-page", "RecordsPage"),
  page("settings/:tab?", "people/settings-page", "SettingsPage"),
  { path: "*", Component: NotFound },
];

export const router = createBrowserRouter([
  { ErrorBoundary: PageFailed, ...lazyPage("auth/forgotten-page", "ForgottenPage"), path: "/forgotten" },
  { ErrorBoundary: PageFailed, ...lazyPage("auth/reset-page", "ResetPage"), path: "/reset" },
  { ErrorBoundary: PageFailed, ...lazyPage("auth/invitation-page", "InvitationPage"), path: "/invitation/:token" },
  {
    path: "/",
    Component: Shell,
    // Nothing is shown before the first page: the server sends the ground in its theme.
    HydrateFallback: () => null,
    ErrorBoundary: PageFailed,
    children: [{ ErrorBoundary: PageFailed, children: inside }],
  },
]);
