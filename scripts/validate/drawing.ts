/** One plain kind of drawing: values with their uncertainty (two standard deviations) on a scale, each before the band it is asked to lie in. */
export interface Mark {
  label: string;
  value: number;
  unc: number;
  from: number;
  to: number;
}

const escapeText = (text: string): string =>
  text.replaceAll("&", "&amp;").replaceAll("<", "&lt;").replaceAll(">", "&gt;");

export function drawMarks(title: string, unit: string, marks: Mark[], low: number, high: number): string {
  const left = 300;
  const width = 480;
  const rowHeight = 22;
  const top = 46;
  const height = top + rowHeight * marks.length + 34;
  const x = (value: number): string =>
    (left + (width * (Math.min(high, Math.max(low, value)) - low)) / (high - low)).toFixed(1);
  const rows = marks.map(({ label, value, unc, from, to }, i) => {
    const y = top + rowHeight * i;
    const isHeld = value + 2 * unc >= from && value - 2 * unc <= to;
    const colour = isHeld ? "#1d5f8a" : "#b3261e";
    return [
      `<text x="${left - 12}" y="${y + 15}" text-anchor="end">${escapeText(label)}</text>`,
      `<rect x="${x(from)}" y="${y + 3}" width="${(Number(x(to)) - Number(x(from))).toFixed(1)}" height="${rowHeight - 6}" fill="#dfe9e2"/>`,
      `<line x1="${x(value - 2 * unc)}" x2="${x(value + 2 * unc)}" y1="${y + 11}" y2="${y + 11}" stroke="${colour}" stroke-width="2"/>`,
      isHeld
        ? `<circle cx="${x(value)}" cy="${y + 11}" r="4" fill="${colour}"/>`
        : `<path d="M${x(value)} ${y + 5} l6 6 l-6 6 l-6 -6 z" fill="${colour}"/>`,
    ].join("\n");
  });
  const ticks = Array.from({ length: 6 }, (_, k) => low + ((high - low) * k) / 5).map((value) => {
    const bottom = top + rowHeight * marks.length;
    return `<line x1="${x(value)}" x2="${x(value)}" y1="${top}" y2="${bottom}" stroke="#c9c9c9" stroke-width="0.5"/><text x="${x(value)}" y="${bottom + 18}" text-anchor="middle">${Number(value.toPrecision(4))}</text>`;
  });
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${left + width + 40} ${height}" font-family="sans-serif" font-size="13" role="img" aria-label="${escapeText(title)}">
<rect width="100%" height="100%" fill="#ffffff"/>
<text x="12" y="22" font-size="15">${escapeText(title)} (${escapeText(unit)})</text>
${ticks.join("\n")}
${rows.join("\n")}
</svg>
`;
}
