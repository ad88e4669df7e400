/** The contract between server and client: shapes, permissions, routes. The one part of the API that the web may import. */
export * from "./common.ts";
export * from "./people.ts";
export * from "./instruments.ts";
export * from "./sources.ts";
export * from "./checks.ts";
export * from "./work.ts";
export * from "./records.ts";
export * from "./permissions.ts";
export * from "./routes.ts";
