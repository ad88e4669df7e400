import { useEffect, useState } from "react";
import { flushSync } from "react-dom";

/** True while the page is laid out for paper. Known at once: there is one moment to draw anew before it is printed. */
export function useIsPrint(): boolean {
  const [isPrint, setPrint] = useState(false);
  useEffect(() => onPrint((now) => flushSync(() => setPrint(now))), []);
  return isPrint;
}

/** Calls as the page has been laid out for paper, and again for the screen. Returns what ends it. */
export function onPrint(listener: (isPrint: boolean) => void): () => void {
  const media = window.matchMedia("print");
  const follow = () => listener(media.matches);
  media.addEventListener("change", follow);
  return () => media.removeEventListener("change", follow);
}
