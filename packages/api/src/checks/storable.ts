/**
 * What a file says, made fit for PostgreSQL's jsonb: no NUL and no half surrogates, which a damaged file may hold in its
 * header. The bytes themselves are kept as they came; what JSON can't hold (NaN) becomes null, as it will be when read back.
 */
export function storableJson<T>(value: T): T {
  return clean(JSON.parse(JSON.stringify(value))) as T;
}

// eslint-disable-next-line no-control-regex -- NUL is exactly what is looked for
const unstorable = /\u0000|[\ud800-\udfff]/gu;

function clean(value: unknown): unknown {
  if (typeof value === "string") return value.replace(unstorable, "\ufffd");
  if (Array.isArray(value)) return value.map(clean);
  if (typeof value !== "object" || value === null) return value;
  return Object.fromEntries(
    Object.entries(value).map(([key, inner]) => [key.replace(unstorable, "\ufffd"), clean(inner)]),
  );
}
