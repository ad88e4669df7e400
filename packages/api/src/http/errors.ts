/** The last door: every refusal leaves as a problem document, every fault of ours is logged and told without its insides. */
import type { ErrorRequestHandler, RequestHandler, Response } from "express";
import type { Logger } from "pino";
import { sqlState } from "./idempotency.ts";
import { Problem, problem } from "./problem.ts";

export function sendProblem(res: Response, found: Problem): void {
  if (found.extra.retryAfterSeconds !== undefined) res.setHeader("Retry-After", String(found.extra.retryAfterSeconds));
  res.status(found.status).type("application/problem+json").send(JSON.stringify(found.document()));
}

/** Addresses below /api that are no route. */
export const unknownRoute: RequestHandler = (req) => {
  throw problem(
    "not-found",
    `There is nothing at ${req.method} ${req.originalUrl.split("?")[0]?.slice(0, 200) ?? ""}.`,
  );
};

/** Database errors that bad input or a race can bring, by SQLSTATE, never by their text. */
const byState: Record<string, () => Problem> = {
  "22021": () =>
    problem(
      "invalid-input",
      "The text holds a character that cannot be stored. Nothing was changed; take it out and try again.",
    ),
  "22P05": () =>
    problem(
      "invalid-input",
      "The text holds a character that cannot be stored. Nothing was changed; take it out and try again.",
    ),
  "22003": () => problem("invalid-input", "A number is too large to be stored. Nothing was changed."),
  "22008": () => problem("invalid-input", "A date or time lies outside what can be stored. Nothing was changed."),
  "22007": () => problem("invalid-input", "A date or time is not one. Nothing was changed."),
  "22P02": () => problem("invalid-input", "A value is not of the kind it must be. Nothing was changed."),
  "23503": () =>
    problem("conflict", "This speaks of something that is not here. Nothing was changed; reload and choose again."),
  "23505": () =>
    problem(
      "conflict",
      "Somebody was faster, or this was sent twice. Nothing was changed by this request; reload to see how it stands.",
    ),
  "40001": () => problem("conflict", "Two changes met at the same moment. Nothing was changed by this one; try again."),
  "40P01": () => problem("conflict", "Two changes met at the same moment. Nothing was changed by this one; try again."),
};

/** Refusals of the body parsers, by their own type. */
function fromParser(error: { type?: unknown; status?: unknown }): Problem | null {
  if (error.type === "entity.too.large")
    return problem("too-large", "The request is larger than 1 MB. Nothing was changed.");
  if (error.type === "entity.parse.failed")
    return problem("bad-request", "The request is no valid JSON. Nothing was changed.");
  if (error.type === "charset.unsupported" || error.type === "encoding.unsupported")
    return problem("unsupported-type", "The request must be UTF-8 JSON. Nothing was changed.");
  if (error.type === "request.aborted") return problem("bad-request", "The request broke off. Nothing was changed.");
  if (typeof error.status === "number" && error.status >= 400 && error.status < 500)
    return problem("bad-request", "The request could not be read. Nothing was changed.");
  return null;
}

export function errorHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, req, res, next) => {
    if (res.headersSent) {
      next(error);
      return;
    }
    const found =
      error instanceof Problem
        ? error
        : typeof error === "object" && error !== null
          ? (byState[sqlState(error) ?? ""]?.() ?? fromParser(error))
          : null;
    if (found !== null) {
      if (!(error instanceof Problem))
        logger.warn({ err: error as Error, method: req.method, url: req.path }, "refused by the database or a parser");
      sendProblem(res, found);
      return;
    }
    logger.error({ err: error as Error, method: req.method, url: req.path }, "a fault of ours");
    sendProblem(
      res,
      problem(
        "internal",
        "Something went wrong on the server. Nothing of this request was stored; what you typed is still here. Try again, and tell whoever runs Wavekeep if it stays.",
      ),
    );
  };
}
