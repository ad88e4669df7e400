import { useEffect } from "react";

/** Names the page in the window's title: `CHK-2027-0063 · Wavekeep`. */
export function useTitle(name: string): void {
  useEffect(() => {
    document.title = name === "" || name === "Wavekeep" ? "Wavekeep" : `${name} · Wavekeep`;
  }, [name]);
}
