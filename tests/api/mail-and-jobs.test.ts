/** Mail from the cause to the mail server, and work that falls due without anybody asking. */
import { beforeAll, expect, test } from "vitest";
import { makeJobs, openBoss } from "@wavekeep/api/jobs/jobs";
import { queues, type QueueName } from "@wavekeep/api/jobs/queues";
import { startWorkers } from "@wavekeep/api/jobs/workers";
import { openCatcher } from "@wavekeep/api/mail/catcher";
import { queueMail } from "@wavekeep/api/mail/outbox";
import { openSender } from "@wavekeep/api/mail/sender";
import { asWavekeep, inLab } from "@wavekeep/api/db/tenancy";
import { useTestApp } from "../support/app.ts";
import { buildLab, type TestLab } from "../support/factories.ts";

const server = useTestApp();
let lab: TestLab;
beforeAll(async () => {
  lab = await buildLab(server, "Mail");
});

const owner = (text: string, values: unknown[] = []) => server.database.owner.query(text, values);
const context = () => asWavekeep({ labId: lab.id, isDemo: false, zone: "Europe/Berlin" });
const put = (causeKey: string) =>
  inLab(server.services.db, context(), (tx) =>
    queueMail(tx, context(), server.services.jobs, {
      to: { personId: lab.manager.id },
      subject: "A subject\r\nBcc: everybody@example.org",
      text: "Hello\n",
      causeKey,
    }),
  );
const mailId = async (causeKey: string): Promise<string> =>
  (await owner("select id from mail_outbox where cause_key = $1", [causeKey])).rows[0].id;

async function until<T>(what: () => T | Promise<T>, holds: (value: T) => boolean): Promise<T> {
  for (let i = 0; i < 150; i += 1) {
    const value = await what();
    if (holds(value)) return value;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
  throw new Error("It did not come about within 15 s.");
}

test("the same cause is queued once; its job exists with it, and neither when the cause is rolled back", async () => {
  expect(await put("cause-1")).toBe(true);
  expect(await put("cause-1")).toBe(false);
  const failed = inLab(server.services.db, context(), async (tx) => {
    await queueMail(tx, context(), server.services.jobs, {
      to: { address: "x@y.example" },
      subject: "Never",
      text: "",
      causeKey: "cause-2",
    });
    throw new Error("the cause failed");
  });
  await expect(failed).rejects.toThrow("the cause failed");
  expect((await owner("select 1 from mail_outbox where cause_key = 'cause-2'")).rowCount).toBe(0);
  const { rows } = await owner(
    "select count(*)::int as n from pgboss.job j where name = $1 and not exists (select 1 from mail_outbox m where m.id = (j.data ->> 'id')::uuid)",
    [queues.deliverMail],
  );
  expect(rows[0].n).toBe(0);
  // Who left the lab is written to no more.
  const gone = await lab.add("Gina Gone", ["technician"]);
  await lab.manager.client.post(`/people/${gone.id}/end`, { reason: "", version: 0 }).expect(204);
  expect(
    await inLab(server.services.db, context(), (tx) =>
      queueMail(tx, context(), server.services.jobs, {
        to: { personId: gone.id },
        subject: "S",
        text: "",
        causeKey: "cause-3",
      }),
    ),
  ).toBe(false);
});

test("a job to a queue that is not there is an error, not a silence", async () => {
  const sent = inLab(server.services.db, context(), (tx) =>
    server.services.jobs.send(tx, "no-such-queue" as QueueName, { labId: lab.id }),
  );
  await expect(sent).rejects.toThrow();
});

test("a mail is delivered once, under one Message-ID, by however many workers; the trail says so", async () => {
  const catcher = await openCatcher();
  const sender = openSender(server.services.db, { smtpUrl: catcher.url, from: "Wavekeep <wavekeep@lab.example>" });
  await put("cause-once");
  const id = await mailId("cause-once");
  await Promise.all(Array.from({ length: 5 }, () => sender.deliver(lab.id, id)));
  await sender.deliver(lab.id, id);
  const caught = catcher.mails.filter(({ messageId }) => messageId === `<${id}@wavekeep>`);
  expect(caught).toMatchObject([
    { to: lab.manager.email, subject: "A subject Bcc: everybody@example.org", text: expect.stringMatching(/^Hello/) },
  ]);
  const { rows } = await owner(
    "select t.canonical from trail_entries t where lab_id = $1 and action = 'mail.sent' and about_id = $2",
    [lab.id, id],
  );
  expect(rows).toHaveLength(1);
  expect(rows[0].canonical).not.toContain(lab.manager.email);
  // Another lab's context finds nothing to deliver.
  const other = await buildLab(server, "Elsewhere");
  await put("cause-foreign");
  await sender.deliver(other.id, await mailId("cause-foreign"));
  expect((await owner("select sent_at from mail_outbox where cause_key = 'cause-foreign'")).rows[0].sent_at).toBeNull();
  sender.close();
  await catcher.close();
});

test("a mail server that is away is tried again; after eight tries the mail is given up, and the trail says so", async () => {
  const sender = openSender(server.services.db, {
    smtpUrl: "smtp://127.0.0.1:9",
    from: "Wavekeep <wavekeep@lab.example>",
  });
  await put("cause-away");
  const id = await mailId("cause-away");
  for (let i = 0; i < 8; i += 1) await expect(sender.deliver(lab.id, id)).rejects.toThrow();
  await sender.deliver(lab.id, id);
  const { rows } = await owner("select attempts, sent_at, last_error from mail_outbox where id = $1", [id]);
  expect(rows).toMatchObject([{ attempts: 8, sent_at: null, last_error: expect.stringMatching(/ECONNREFUSED/) }]);
  expect(
    (await owner("select 1 from trail_entries where action = 'mail.failed' and about_id = $1", [id])).rowCount,
  ).toBe(1);
  sender.close();
});

test("workers as the app's role take jobs, visit every lab at a tick, and sweep what has an end", async () => {
  const catcher = await openCatcher();
  const sender = openSender(server.services.db, { smtpUrl: catcher.url, from: "Wavekeep <wavekeep@lab.example>" });
  const boss = openBoss(server.services.config.databaseUrl, { worker: true });
  const faults: Error[] = [];
  boss.on("error", (error) => faults.push(error));
  await boss.start();
  const visited = { due: new Set<string>(), aside: new Set<string>() };
  const services = { ...server.services, jobs: makeJobs(boss) };
  await owner("insert into rate_counters (key, points, expires_at) values ('old', 1, now() - interval '1 minute')");
  await startWorkers(boss, services, sender, {
    dueAndOverdue: async (_services, visit) => void visited.due.add(visit.labId),
    asideDrafts: async (_services, visit) => {
      visited.aside.add(visit.labId);
      // One lab's failure does not keep the others waiting.
      if (visit.labId === lab.id) throw new Error("this lab fails");
    },
  });
  await put("cause-worker");
  await boss.send(queues.sweep, {});
  await boss.send(queues.signHeads, {});
  const all = (await owner("select id from labs where id <> '00000000-0000-7000-8000-000000000000'")).rows
    .map(({ id }) => id as string)
    .sort();
  await until(
    () => [...visited.due].sort().join(),
    (seen) => seen === all.join(),
  );
  await until(
    () => [...visited.aside].sort().join(),
    (seen) => seen === all.join(),
  );
  await until(
    () => catcher.mails.filter(({ messageId }) => messageId.includes("@wavekeep")).length,
    (count) => count > 0,
  );
  await until(
    async () => (await owner("select 1 from rate_counters where key = 'old'")).rowCount,
    (count) => count === 0,
  );
  await until(
    async () =>
      (await owner("select count(distinct lab_id)::int as n from signed_heads where cause = 'daily'")).rows[0].n,
    (count) => count === all.length,
  );
  expect(faults).toEqual([]);
  await boss.stop({ graceful: false });
  sender.close();
  await catcher.close();
});

test("the app's role can make neither schema nor queues: what the migrating owner made is what there is", async () => {
  const boss = openBoss(server.services.config.databaseUrl, { worker: false });
  boss.on("error", () => {});
  await boss.start();
  await expect(boss.createQueue("own-queue")).rejects.toMatchObject({ code: "42501" });
  await boss.stop({ graceful: false });
  const { rows } = await owner("select name from pgboss.queue where name not like '\\_\\_%' order by 1");
  expect(rows.map(({ name }) => name)).toEqual(Object.values(queues).sort());
});
