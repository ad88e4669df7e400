import { useEffect, useRef } from "react";

const KEY = "wavekeep-active-at";
const EVENTS = ["pointerdown", "keydown", "wheel", "touchstart"] as const;

/**
 * Calls once when nobody has touched this device's Wavekeep for so long, in any of its windows. Pages that refresh by
 * themselves keep the server's session alive; only hands keep this.
 */
export function useIdle(seconds: number, isWatching: boolean, onIdle: () => void): void {
  const call = useRef(onIdle);
  useEffect(() => {
    call.current = onIdle;
  });
  useEffect(() => {
    if (!isWatching || !(seconds > 0)) return undefined;
    let written = 0;
    const touch = () => {
      const now = Date.now();
      if (now - written < 3000) return;
      written = now;
      try {
        localStorage.setItem(KEY, String(now));
      } catch {
        // A browser that keeps nothing: this window counts alone.
      }
    };
    const lastTouch = () => {
      try {
        return Math.max(written, Number(localStorage.getItem(KEY) ?? 0));
      } catch {
        return written;
      }
    };
    touch();
    for (const name of EVENTS) document.addEventListener(name, touch, { passive: true, capture: true });
    const timer = setInterval(() => {
      if (Date.now() - lastTouch() >= seconds * 1000) call.current();
    }, 1000);
    return () => {
      clearInterval(timer);
      for (const name of EVENTS) document.removeEventListener(name, touch, { capture: true });
    };
  }, [seconds, isWatching]);
}
