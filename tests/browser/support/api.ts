/** What a test needs in place before it looks: done through the API with the session of a page that is signed in. */
import type { Page } from "playwright-core";
import type { Check } from "@wavekeep/api/contract/checks";
import type { FleetRow } from "@wavekeep/api/contract/instruments";
import type { Source } from "@wavekeep/api/contract/sources";
import { password, type CaptureFile } from "./steps.ts";

export async function read<Reply>(page: Page, route: string): Promise<Reply> {
  const reply = await page.request.get(`/api${route}`);
  if (!reply.ok()) throw new Error(`GET ${route} answered ${reply.status()}: ${await reply.text()}`);
  return (await reply.json()) as Reply;
}

/** A change; `data` is sent as JSON, `files` as a form. */
export async function send<Reply>(
  page: Page,
  method: "post" | "put" | "delete",
  route: string,
  data?: object,
  files?: FormData,
): Promise<Reply> {
  const { csrfToken } = await read<{ csrfToken: string }>(page, "/session");
  const reply = await page.request[method](`/api${route}`, {
    headers: { "x-csrf-token": csrfToken },
    ...(data === undefined ? {} : { data }),
    ...(files === undefined ? {} : { multipart: files }),
  });
  if (!reply.ok()) throw new Error(`${method} ${route} answered ${reply.status()}: ${await reply.text()}`);
  return (reply.status() === 204 ? undefined : await reply.json()) as Reply;
}

export async function instrumentNamed(page: Page, name: string): Promise<FleetRow> {
  const { items } = await read<{ items: FleetRow[] }>(page, "/instruments");
  return items.find((row) => row.name === name)!;
}

export async function sourceLabelled(page: Page, label: string): Promise<Source> {
  const { items } = await read<{ items: Source[] }>(page, "/sources");
  return items.find((source) => source.label === label)!;
}

/** A draft with its captures analysed, as the person signed in on the page. */
export async function makeDraft(page: Page, instrument: string, source: string, files: CaptureFile[]): Promise<Check> {
  const { configurationId } = await instrumentNamed(page, instrument);
  const begun = await send<Check>(page, "post", "/checks", {
    configurationId,
    condition: "as-found",
    followsCheckId: null,
  });
  const { id } = begun.summary;
  const form = new FormData();
  form.set("part", "lamp");
  for (const { name, bytes } of files) form.append("files", new File([new Uint8Array(bytes)], name));
  await send(page, "post", `/checks/${id}/captures`, undefined, form);
  const drafted = await send<Check>(page, "put", `/checks/${id}/draft`, {
    ...begun.draft,
    sourceIds: [(await sourceLabelled(page, source)).id],
    temperatureC: 21.4,
    minutesSinceSwitchOn: 30,
  });
  return send<Check>(page, "post", `/checks/${id}/analyses`, { version: drafted.draft.version });
}

export const submitDraft = (page: Page, check: Check): Promise<Check> =>
  send<Check>(page, "post", `/checks/${check.summary.id}/submit`, { password, version: check.draft.version });
