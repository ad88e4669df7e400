/**
 * A local SMTP server that keeps what it is sent, and its page. For a demo on this machine alone: mail leaves nobody's
 * house, and everybody who can open the page can read it.
 */
import type { AddressInfo } from "node:net";
import type { Request, Response } from "express";
import { simpleParser } from "mailparser";
import { SMTPServer } from "smtp-server";

export interface CaughtMail {
  at: Date;
  to: string;
  subject: string;
  text: string;
  messageId: string;
}

export interface MailCatcher {
  /** smtp://127.0.0.1:port */
  url: string;
  /** Newest first. */
  mails: CaughtMail[];
  close(): Promise<void>;
}

const KEPT = 300;

export async function openCatcher(): Promise<MailCatcher> {
  const mails: CaughtMail[] = [];
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ["STARTTLS", "AUTH"],
    onData(stream, _session, done) {
      simpleParser(stream).then(
        (mail) => {
          const to = Array.isArray(mail.to) ? mail.to.map((address) => address.text).join(", ") : (mail.to?.text ?? "");
          mails.unshift({
            at: mail.date ?? new Date(),
            to,
            subject: mail.subject ?? "",
            text: mail.text ?? "",
            messageId: mail.messageId ?? "",
          });
          mails.length = Math.min(mails.length, KEPT);
          done();
        },
        (error: unknown) => done(error as Error),
      );
    },
  });
  // A client that hangs up is its own business.
  server.on("error", () => {});
  await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
  const { port } = server.server.address() as AddressInfo;
  return {
    url: `smtp://127.0.0.1:${port}`,
    mails,
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}

const escapeHtml = (text: string): string => text.replace(/[&<>"']/g, (sign) => `&#${sign.charCodeAt(0)};`);

/** Text with its links to this server made clickable. */
const withLinks = (text: string): string =>
  escapeHtml(text).replace(/https?:\/\/[^\s<&]+/g, (url) => `<a href="${url}">${url}</a>`);

/** The page at /dev/mail: plain HTML, no script. `?json` gives the same for tests. */
export function mailPage(catcher: MailCatcher) {
  return (req: Request, res: Response): void => {
    res.setHeader("Cache-Control", "no-store");
    if (req.query["json"] !== undefined) {
      res.json({ mails: catcher.mails });
      return;
    }
    const items = catcher.mails
      .map(
        (mail) =>
          `<article><h2>${escapeHtml(mail.subject)}</h2><p class="note">to ${escapeHtml(mail.to)} · ${mail.at.toISOString().replace("T", " ").slice(0, 16)} UTC</p><pre>${withLinks(mail.text)}</pre></article>`,
      )
      .join("\n");
    res.type("html").send(`<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>Mail of the demo</title>
<style>body{font:14px/20px "Roboto Flex Variable",system-ui,sans-serif;max-width:46rem;margin:2rem auto;padding:0 1rem;background:#f6f5f1;color:#14181e}
h1{font-weight:360;font-size:30px;line-height:36px}h2{font-size:16px;margin:0}article{border-top:1px solid #999;padding:12px 0}.note{color:#555;margin:0;font-size:12px}
pre{white-space:pre-wrap;overflow-wrap:anywhere;font:inherit;margin:8px 0 0}</style></head>
<body><main><h1>Mail of the demo</h1><p>What this server would have sent. Newest first; it is forgotten when the server stops.</p>
${items === "" ? "<p>Nothing yet.</p>" : items}</main></body></html>`);
  };
}
