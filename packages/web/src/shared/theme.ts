/**
 * Themes, remembered on this device in a cookie, so that the server can send the page in its theme (no white flash):
 * it sets `data-theme` on `<html>` to the cookie's value when that is one of `themeNames`.
 */
import { useSyncExternalStore } from "react";

export const themeNames = ["paper", "ink", "dark-room", "dark-room-amber", "dark-room-green"] as const;
export type ThemeName = (typeof themeNames)[number];

export const themeWords: Record<ThemeName, string> = {
  paper: "Paper",
  ink: "Ink",
  "dark-room": "Dark room",
  "dark-room-amber": "Dark room, amber",
  "dark-room-green": "Dark room, green",
};

export const isDarkRoom = (theme: ThemeName): boolean => theme.startsWith("dark-room");

const COOKIE = "wavekeep-theme";
const listeners = new Set<() => void>();
const isTheme = (text: string | undefined): text is ThemeName => themeNames.some((name) => name === text);

/** The theme on the page. */
export function currentTheme(): ThemeName {
  const shown = document.documentElement.dataset["theme"];
  return isTheme(shown) ? shown : "paper";
}

/** Shows a theme at once: page, title bar and favicon together. */
function showTheme(theme: ThemeName): void {
  document.documentElement.dataset["theme"] = theme;
  const ground = getComputedStyle(document.documentElement).getPropertyValue("--ground").trim();
  document.querySelector('meta[name="theme-color"]')?.setAttribute("content", ground);
  document.querySelector('link[rel="icon"]')?.setAttribute("href", `/favicon-${theme}.svg`);
  for (const listener of listeners) listener();
}

/** Chooses a theme for this device, for a year. */
export function chooseTheme(theme: ThemeName): void {
  document.cookie = `${COOKIE}=${theme}; Path=/; Max-Age=31536000; SameSite=Lax`;
  showTheme(theme);
}

/** Shows what this device remembers, where the server has not done so already. */
export function recallTheme(): void {
  const remembered = document.cookie
    .split("; ")
    .find((pair) => pair.startsWith(`${COOKIE}=`))
    ?.slice(COOKIE.length + 1);
  showTheme(isTheme(remembered) ? remembered : currentTheme());
}

function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

export const useTheme = (): ThemeName => useSyncExternalStore(subscribe, currentTheme);
