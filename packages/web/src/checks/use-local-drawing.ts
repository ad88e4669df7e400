/** Draws the last dropped file on this device while it travels. */
import type { PixelAxis } from "@wavekeep/core";
import { useCallback, useEffect, useRef, useState } from "react";
import type { DrawReply, DrawRequest } from "./draw-worker.ts";

/** @returns what the worker drew last, and a function that draws a file; forgetting is drawing nothing */
export function useLocalDrawing(axis: PixelAxis | null): {
  drawn: DrawReply | null;
  draw: (file: File) => void;
  forget: () => void;
} {
  const worker = useRef<Worker | null>(null);
  const asked = useRef(0);
  const [drawn, setDrawn] = useState<DrawReply | null>(null);
  useEffect(
    () => () => {
      worker.current?.terminate();
      worker.current = null;
    },
    [],
  );
  const draw = useCallback(
    (file: File) => {
      const id = ++asked.current;
      if (worker.current === null) {
        worker.current = new Worker(new URL("./draw-worker.ts", import.meta.url), { type: "module" });
        worker.current.addEventListener("message", (event: MessageEvent<DrawReply>) => {
          if (event.data.id === asked.current) setDrawn(event.data);
        });
      }
      void file
        .arrayBuffer()
        .then((bytes) =>
          worker.current?.postMessage({ id, name: file.name, bytes, axis } satisfies DrawRequest, [bytes]),
        );
    },
    [axis],
  );
  const forget = useCallback(() => {
    asked.current += 1;
    setDrawn(null);
  }, []);
  return { drawn, draw, forget };
}
