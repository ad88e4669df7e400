import { routes } from "../contract/routes.ts";
import { mount, type Api } from "../http/mount.ts";
import { problem } from "../http/problem.ts";
import { addCaptures, readCaptureBytes, type CaptureServices } from "./service.ts";

export function mountCaptures(api: Api, services: CaptureServices): void {
  mount(api, routes.addCaptures, ({ ctx, params, files, fields }) =>
    addCaptures(services, ctx, params.checkId, { part: partOf(fields["part"]), files }),
  );
  mount(api, routes.readCapture, ({ ctx, params }) => readCaptureBytes(services.db, ctx, params.captureId));
}

function partOf(text: string | undefined): "lamp" | "dark" {
  if (text === undefined || text === "lamp") return "lamp";
  if (text === "dark") return "dark";
  throw problem("invalid-input", "A capture's part is lamp or dark. Nothing was stored; choose one of them.", {
    fields: [{ path: "part", message: "Choose lamp or dark." }],
  });
}
