import { useLayoutEffect, useRef, useState, type RefObject } from "react";
import { flushSync } from "react-dom";
import { onPrint } from "./use-print.ts";

/** Width of an element in whole px, followed as it changes, on paper too; `initial` until it is on the page. */
export function useWidth<E extends HTMLElement>(initial = 1032): [RefObject<E | null>, number] {
  const ref = useRef<E>(null);
  const [width, setWidth] = useState(initial);
  useLayoutEffect(() => {
    const element = ref.current;
    if (element === null) return undefined;
    const measure = () => {
      const next = Math.floor(element.clientWidth);
      if (next > 0) setWidth(next);
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    const endPrint = onPrint(() => flushSync(measure));
    return () => {
      observer.disconnect();
      endPrint();
    };
  }, []);
  return [ref, width];
}
