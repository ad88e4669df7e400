import { expect, test } from "vitest";
import { addressOf, readStartSettings } from "./settings.mjs";

const own = {
  DATABASE_URL: "postgres://wavekeep_app:a@db.example/wavekeep",
  DATABASE_OWNER_URL: "postgres://wavekeep_owner:b@db.example/wavekeep",
};

test("without any variable: the local database with the demo lab, on loopback, port 4310", () => {
  expect(readStartSettings({})).toMatchObject({ host: "127.0.0.1", port: 4310, server: null, demo: true });
});

test("DATABASE_OWNER_URL alone is refused with a sentence that names what is missing", () => {
  expect(() => readStartSettings({ DATABASE_OWNER_URL: own.DATABASE_OWNER_URL })).toThrow("but DATABASE_URL is not");
});

test("DATABASE_URL alone is used as it stands: without the owner nothing is migrated", () => {
  expect(readStartSettings({ DATABASE_URL: own.DATABASE_URL }).server).toEqual({
    appUrl: own.DATABASE_URL,
    ownerUrl: null,
  });
});

test("an address that is none is refused and its variable named", () => {
  expect(() => readStartSettings({ ...own, DATABASE_URL: "db.example" })).toThrow(
    "DATABASE_URL must be an address like",
  );
});

test("the app must not sign in as the role that migrates", () => {
  expect(() => readStartSettings({ ...own, DATABASE_URL: own.DATABASE_OWNER_URL })).toThrow("weaker role of its own");
});

test("on a server of the lab's own, and beyond loopback, the demo lab is there only when it is asked for", () => {
  expect(readStartSettings(own).demo).toBe(false);
  expect(readStartSettings({ HOST: "0.0.0.0" }).demo).toBe(false);
  expect(readStartSettings({ ...own, WAVEKEEP_DEMO: "1" }).demo).toBe(true);
  expect(readStartSettings({ WAVEKEEP_DEMO: "0" }).demo).toBe(false);
});

test.each(["abc", "-1", "65536", "43.1"])("PORT=%s is refused and named", (text) => {
  expect(() => readStartSettings({ PORT: text })).toThrow(`PORT must be a whole number from 0 to 65535; got ${text}.`);
});

test("a server on every address is reached at 127.0.0.1, an IPv6 one in brackets", () => {
  expect(addressOf("0.0.0.0", 4310)).toBe("http://127.0.0.1:4310");
  expect(addressOf("::1", 4310)).toBe("http://[::1]:4310");
});
