import { useEffect } from "react";

/** Names the page in the window's title: `CHK-2027-0063 · Wavekeep`. */
export function useTitle(name: string): void {
  useEffect(() => {
    document.title = name === "" || name === "Wavekeep" ? "Wavekeep" : `${name} · Wavekeep`;
  }, [name]);
}

/** What the foot of every printed page says at the left; the page's number stands at the right. */
export function usePrintedFoot(text: string): void {
  useEffect(() => {
    const root = document.documentElement;
    root.style.setProperty("--page-foot", JSON.stringify(text));
    return () => {
      root.style.removeProperty("--page-foot");
    };
  }, [text]);
}
