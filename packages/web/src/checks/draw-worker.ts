/** The worker that draws a dropped file while it travels: reads and thins it by the same core as the server. No verdict. */
import type { PixelAxis } from "@wavekeep/core";
import { drawCapture, type DrawnCapture } from "./draw-capture.ts";

export interface DrawRequest {
  id: number;
  name: string;
  bytes: ArrayBuffer;
  axis: PixelAxis | null;
}
export interface DrawReply {
  id: number;
  name: string;
  elapsedMs: number;
  drawn: DrawnCapture;
}

self.addEventListener("message", (event: MessageEvent<DrawRequest>) => {
  const { id, name, bytes, axis } = event.data;
  const started = performance.now();
  const drawn = drawCapture(new Uint8Array(bytes), name, axis);
  self.postMessage({ id, name, elapsedMs: performance.now() - started, drawn } satisfies DrawReply);
});
