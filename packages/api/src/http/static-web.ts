/** The built client: hashed assets for ever, its one page for every address, sent in the theme this device chose. */
import fs from "node:fs";
import path from "node:path";
import express, { type RequestHandler, type Router } from "express";

/** Themes and their grounds, as in the client's tokens: the page is sent in them, so that nothing flashes white. */
const grounds: Record<string, string> = {
  paper: "#F6F5F1",
  ink: "#14181E",
  "dark-room": "#080100",
  "dark-room-amber": "#050200",
  "dark-room-green": "#000301",
};

/** The page in a theme; an unknown one leaves it as built. */
export function inTheme(page: string, theme: string | undefined): string {
  const ground = theme === undefined ? undefined : grounds[theme];
  if (theme === undefined || ground === undefined) return page;
  return page
    .replace(/(<html[^>]*\bdata-theme=")[^"]*"/, `$1${theme}"`)
    .replace(/(<meta name="theme-color" content=")[^"]*"/, `$1${ground}"`)
    .replace(/favicon-paper(-[\w-]+)?\.svg/, `favicon-${theme}.svg`);
}

const themeOf = (cookies: string | undefined): string | undefined =>
  /(?:^|;\s*)wavekeep-theme=([a-z-]+)/.exec(cookies ?? "")?.[1];

export function serveWeb(webDir: string): Router {
  const router = express.Router();
  const page = fs.readFileSync(path.join(webDir, "index.html"), "utf8");
  router.use("/assets", express.static(path.join(webDir, "assets"), { immutable: true, maxAge: "365d", index: false }));
  router.use(express.static(webDir, { index: false, maxAge: "1h" }));
  const sendPage: RequestHandler = (req, res, next) => {
    if (req.method !== "GET" && req.method !== "HEAD") return next();
    // A file that is not there is not a page.
    if (/\.[a-z0-9]{2,5}$/i.test(req.path)) {
      res.status(404).type("txt").send("Not found");
      return;
    }
    res.setHeader("Cache-Control", "no-cache");
    res.setHeader("Vary", "Cookie");
    res.type("html").send(inTheme(page, themeOf(req.headers.cookie)));
  };
  router.get("/{*path}", sendPage);
  return router;
}
