/** What people call a configuration: its instrument's name, with its own where it has one: `Dunlin`, `Curlew (visible)`. */
export const calledText = (instrumentName: string, configurationName: string | null): string =>
  configurationName === null ? instrumentName : `${instrumentName} (${configurationName})`;

/** `Dunlin’s check`, `the check of Curlew (visible)`. */
export function checkOfText(instrumentName: string, configurationName: string | null): string {
  if (configurationName !== null) return `the check of ${calledText(instrumentName, configurationName)}`;
  return `${instrumentName}${instrumentName.endsWith("s") ? "’" : "’s"} check`;
}

/** Where a configuration is looked at; a plain instrument's address stays plain. */
export function configurationPath(
  at: { instrumentId: string; configurationId: string; configurationName: string | null },
  options: { doing?: string } = {},
): string {
  const query = [
    ...(at.configurationName === null ? [] : [`configuration=${at.configurationId}`]),
    ...(options.doing === undefined ? [] : [`do=${options.doing}`]),
  ];
  return `/instruments/${at.instrumentId}${query.length === 0 ? "" : `?${query.join("&")}`}`;
}
