/** Replies that are bytes: a capture as received, a certificate, a report. */
import type { Request, Response } from "express";

export interface FileReply {
  file: {
    bytes: Uint8Array;
    type: string;
    name: string;
    /** Shown in the browser where its type is safe to show; everything else is downloaded. */
    inline?: boolean;
    /** SHA-256, hex: entity tag of what never changes. */
    sha256?: string;
  };
}

export const isFileReply = (value: unknown): value is FileReply =>
  typeof value === "object" &&
  value !== null &&
  "file" in value &&
  (value as FileReply).file.bytes instanceof Uint8Array;

/** Types that a browser may show on our own origin. */
const shownInline = new Set(["application/pdf", "image/png", "image/jpeg"]);

export function sendFile(req: Request, res: Response, { file }: FileReply): void {
  const inline = file.inline === true && shownInline.has(file.type);
  const plainName = file.name.replace(/[^\w.-]+/g, "_").slice(-120) || "file";
  res.setHeader("Content-Type", file.type);
  res.setHeader(
    "Content-Disposition",
    `${inline ? "inline" : "attachment"}; filename="${plainName}"; filename*=UTF-8''${encodeURIComponent(file.name).replace(/['()*]/g, (c) => `%${c.charCodeAt(0).toString(16)}`)}`,
  );
  res.setHeader("Cache-Control", "private, no-cache");
  if (file.sha256 !== undefined) {
    res.setHeader("ETag", `"${file.sha256}"`);
    if (req.fresh) {
      res.status(304).end();
      return;
    }
  }
  res.end(Buffer.from(file.bytes.buffer, file.bytes.byteOffset, file.bytes.byteLength));
}
