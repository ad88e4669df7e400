/** Files received by multer, in memory, within the route's limits; what is over them is refused before it is read. */
import type { Request, Response } from "express";
import multer from "multer";
import { problem } from "./problem.ts";

export interface ReceivedFile {
  /** As the sender named it, without folders. */
  name: string;
  bytes: Buffer;
}

export interface UploadLimits {
  field: string;
  maxFiles: number;
  maxBytes: number;
}

const MEGABYTE = 1024 * 1024;
/** Room for part headers and text fields beside the files. */
const OVERHEAD_BYTES = 256 * 1024;
/** All files of one request together: they are held in memory until they are stored. */
const REQUEST_FILES = 4;

/** Text sent by a browser as UTF-8 but labelled latin1 by the form's header. */
const fileName = (raw: string): string => {
  const utf8 = Buffer.from(raw, "latin1").toString("utf8");
  const name = (utf8.includes("\uFFFD") ? raw : utf8).split(/[\\/]/).at(-1) ?? "";
  // eslint-disable-next-line no-control-regex -- control characters have no place in a name
  return name.replace(/[\u0000-\u001f\u007f]/g, "").slice(0, 200) || "unnamed";
};

/**
 * Receive a multipart request.
 *
 * @throws problem "too-large" (by Content-Length, before a byte is read, or while reading), "unsupported-type",
 *   "bad-request" for a broken form, "invalid-input" for no file
 */
export async function receiveFiles(
  req: Request,
  res: Response,
  limits: UploadLimits,
): Promise<{ files: ReceivedFile[]; fields: Record<string, string> }> {
  const largest = `${Math.floor(limits.maxBytes / MEGABYTE)} MB`;
  const tooLarge = () =>
    problem(
      "too-large",
      `A file may be at most ${largest}${limits.maxFiles > 1 ? ", and one upload at most four times that" : ""}. This one was not read and nothing was stored; send it smaller or in parts.`,
    );
  const type = req.headers["content-type"] ?? "";
  if (!/^multipart\/form-data\b/i.test(type)) {
    throw problem("unsupported-type", "Files are sent as a form (multipart/form-data). Nothing was stored.");
  }
  const declared = Number(req.headers["content-length"]);
  // Without a stated size nothing would bound what is held in memory; every browser states it.
  if (!Number.isFinite(declared)) {
    throw problem("bad-request", "The upload does not state its size (Content-Length). Nothing was stored.");
  }
  if (declared > limits.maxBytes * Math.min(limits.maxFiles, REQUEST_FILES) + OVERHEAD_BYTES) {
    throw tooLarge();
  }
  const receive = multer({
    storage: multer.memoryStorage(),
    limits: {
      fileSize: limits.maxBytes,
      files: limits.maxFiles,
      fields: 20,
      fieldSize: 64 * 1024,
      parts: limits.maxFiles + 20,
    },
  }).array(limits.field, limits.maxFiles);
  await new Promise<void>((resolve, reject) => {
    receive(req, res, (error: unknown) => {
      if (error === undefined || error === null) return resolve();
      if (error instanceof multer.MulterError) {
        if (error.code === "LIMIT_FILE_SIZE") return reject(tooLarge());
        if (error.code === "LIMIT_FILE_COUNT" || error.code === "LIMIT_PART_COUNT") {
          return reject(
            problem(
              "too-large",
              `At most ${limits.maxFiles} files are taken at once. Nothing was stored; send the rest afterwards.`,
            ),
          );
        }
        return reject(
          problem(
            "bad-request",
            `The form was not understood: files belong in the field "${limits.field}". Nothing was stored.`,
          ),
        );
      }
      reject(problem("bad-request", "The upload broke off or its form is damaged. Nothing was stored; send it again."));
    });
  });
  const files = ((req.files as Express.Multer.File[] | undefined) ?? []).map((file) => ({
    name: fileName(file.originalname),
    bytes: file.buffer,
  }));
  if (files.length === 0)
    throw problem("invalid-input", "No file came with the form. Choose at least one.", {
      fields: [{ path: limits.field, message: "Choose a file." }],
    });
  const fields: Record<string, string> = {};
  for (const [key, value] of Object.entries((req.body ?? {}) as Record<string, unknown>)) {
    if (typeof value === "string") fields[key] = value;
  }
  return { files, fields };
}
