/**
 * A plain printed sheet on pdfkit: A4, 18 mm margins, text in Roboto Flex, hairlines, tables whose heads repeat and whose
 * rows stay whole. It measures and breaks text itself, because a line may need more than one face (Latin, extended, Greek).
 */
import PDFDocument from "pdfkit";
import {
  greekRegular,
  greekStrong,
  latinExtRegular,
  latinExtStrong,
  latinRegular,
  latinStrong,
} from "./fonts/roboto-flex.ts";

const pointsPerMm = 72 / 25.4;
const margin = 18 * pointsPerMm;
const pageWidth = 595.28;
const pageHeight = 841.89;
/** Room for the mark and the footer below the body. */
const footRoom = 30;

export type Weight = "regular" | "strong";
export interface TextStyle {
  size?: number;
  weight?: Weight;
  grey?: boolean;
}
export interface Column {
  title: string;
  /** Share of the body's width. */
  share: number;
  align?: "left" | "right";
}
export interface Cell {
  text: string;
  strong?: boolean;
}
export interface TableRow {
  cells: (string | Cell)[];
  /** Under the row, from its second column on, inside the same hairline. */
  note?: string;
  grey?: boolean;
}

const faces = {
  latin: ["latin-regular", "latin-strong"],
  ext: ["ext-regular", "ext-strong"],
  greek: ["greek-regular", "greek-strong"],
} as const;
type Face = keyof typeof faces;

const fontFiles = {
  "latin-regular": latinRegular,
  "latin-strong": latinStrong,
  "ext-regular": latinExtRegular,
  "ext-strong": latinExtStrong,
  "greek-regular": greekRegular,
  "greek-strong": greekStrong,
};
type FontName = keyof typeof fontFiles;

/** Fonts as pdfkit parsed them, and widths at size 1, for all sheets of this thread: parsing costs more than printing. */
const parsedFonts = new Map<FontName, Buffer>();
const widths = new Map<string, number>();
/** Texts of reports repeat; those that do not (names, numbers) must not pile up. */
const MOST_WIDTHS = 20_000;

/** pdfkit takes a parsed font wherever it takes a font's bytes, though its types name the bytes alone. */
function fontOf(name: FontName): Buffer {
  const known = parsedFonts.get(name);
  if (known !== undefined) return known;
  const bytes = Buffer.from(fontFiles[name], "base64");
  const { _font: embedded } = new PDFDocument({ autoFirstPage: false }).font(bytes) as unknown as {
    _font: { font: Buffer };
  };
  parsedFonts.set(name, embedded.font);
  return embedded.font;
}

/** Face of a character; what none has is printed as a question mark in the Latin one. */
function faceOf(codePoint: number): Face {
  if (codePoint >= 0x370 && codePoint <= 0x3ff) return "greek";
  if (
    (codePoint >= 0x100 && codePoint <= 0x24f && codePoint !== 0x131 && codePoint !== 0x152 && codePoint !== 0x153) ||
    (codePoint >= 0x1e00 && codePoint <= 0x1eff)
  )
    return "ext";
  return "latin";
}
const latinBeyond = new Set([
  0x131, 0x152, 0x153, 0x2013, 0x2014, 0x2018, 0x2019, 0x201c, 0x201d, 0x2022, 0x2026, 0x20ac, 0x2212,
]);

/** The face has no narrow no-break space: it is drawn as a gap of this share of the size. */
const narrowSpace = "\u202f";
const narrowGap = 0.2;

interface Run {
  /** Null: a narrow gap. */
  face: Face | null;
  text: string;
}

function runsOf(text: string): Run[] {
  const runs: Run[] = [];
  for (const character of text) {
    if (character === narrowSpace) {
      runs.push({ face: null, text: character });
      continue;
    }
    const codePoint = character.codePointAt(0)!;
    const face = faceOf(codePoint);
    const printable =
      face !== "latin" ||
      (codePoint >= 0x20 && codePoint <= 0x7e) ||
      (codePoint >= 0xa0 && codePoint <= 0xff) ||
      latinBeyond.has(codePoint);
    const shown = printable ? character : "?";
    const last = runs.at(-1);
    if (last !== undefined && last.face === face) last.text += shown;
    else runs.push({ face, text: shown });
  }
  return runs;
}

export class PdfSheet {
  readonly bodyWidth = pageWidth - 2 * margin;
  private readonly doc: PDFKit.PDFDocument;
  private readonly chunks: Buffer[] = [];
  private readonly registered = new Set<FontName>();
  private y = margin;

  /** @param createdAt fixed, so that the same report is the same bytes */
  constructor(info: { title: string; author: string; createdAt: Date }) {
    this.doc = new PDFDocument({
      size: "A4",
      // The sheet keeps its own margins; pdfkit would break pages by itself.
      margin: 0,
      bufferPages: true,
      autoFirstPage: true,
      info: {
        Title: info.title,
        Author: info.author,
        Creator: "Wavekeep",
        Producer: "Wavekeep",
        CreationDate: info.createdAt,
        ModDate: info.createdAt,
      },
    });
    this.doc.on("data", (chunk: Buffer) => this.chunks.push(chunk));
  }

  /** A paragraph over the body's width (or a share of it), broken at spaces. */
  paragraph(
    text: string,
    style: TextStyle = {},
    options: { after?: number; left?: number; width?: number } = {},
  ): void {
    const left = options.left ?? 0;
    for (const line of this.wrap(text, options.width ?? this.bodyWidth - left, style)) {
      this.room(lineHeight(style));
      this.line(line, margin + left, this.y, style);
      this.y += lineHeight(style);
    }
    this.y += options.after ?? 4;
  }

  /** A section opens with a rule over the body. */
  section(title: string): void {
    this.room(60);
    this.y += 8;
    this.rule(0.8, "#1b2230");
    this.y += 8;
    this.paragraph(title, { weight: "strong", size: 10.5 }, { after: 4 });
  }

  /** Name and value pairs, in so many columns. */
  facts(pairs: readonly (readonly [string, string])[], columns = 2): void {
    const width = this.bodyWidth / columns - 10;
    for (let i = 0; i < pairs.length; i += columns) {
      const row = pairs
        .slice(i, i + columns)
        .map(([name, value]) => ({ name, lines: this.wrap(value, width - 90, {}) }));
      const height = Math.max(...row.map(({ lines }) => lines.length)) * lineHeight({});
      this.room(height + 3);
      row.forEach(({ name, lines }, column) => {
        const x = margin + column * (this.bodyWidth / columns);
        this.line(name, x, this.y, { grey: true, size: 8 });
        lines.forEach((line, index) => this.line(line, x + 90, this.y + index * lineHeight({}), {}));
      });
      this.y += height + 3;
    }
    this.y += 3;
  }

  /** A table whose head repeats on every page and whose rows are not broken. */
  table(columns: readonly Column[], rows: readonly TableRow[]): void {
    const style: TextStyle = { size: 8 };
    const widths = columns.map((column) => column.share * this.bodyWidth);
    const lefts = widths.map((_, index) => margin + widths.slice(0, index).reduce((sum, width) => sum + width, 0));
    const head = () => {
      columns.forEach((column, index) =>
        this.cell(column.title, lefts[index]!, widths[index]!, { size: 7.5, grey: true }, column.align),
      );
      this.y += lineHeight({ size: 7.5 }) + 2;
      this.rule(0.6, "#868276");
      this.y += 3;
    };
    this.room(50);
    head();
    for (const row of rows) {
      const wrapped = row.cells.map((cell, index) =>
        this.wrap(textOf(cell), widths[index]! - 6, { ...style, weight: weightOf(cell) }),
      );
      const noteLines = row.note === undefined ? [] : this.wrap(row.note, this.bodyWidth - widths[0]!, { size: 7.5 });
      const height =
        Math.max(...wrapped.map((lines) => lines.length)) * lineHeight(style) +
        noteLines.length * lineHeight({ size: 7.5 }) +
        4;
      if (this.y + height > pageHeight - margin - footRoom) {
        this.newPage();
        head();
      }
      wrapped.forEach((lines, index) => {
        lines.forEach((line, at) => {
          const top = this.y;
          this.y += at * lineHeight(style);
          this.cell(
            line,
            lefts[index]!,
            widths[index]!,
            { ...style, weight: weightOf(row.cells[index]!), grey: row.grey },
            columns[index]!.align,
          );
          this.y = top;
        });
      });
      this.y += Math.max(...wrapped.map((lines) => lines.length)) * lineHeight(style);
      for (const line of noteLines) {
        this.line(line, lefts[1] ?? margin, this.y, { size: 7.5, grey: true });
        this.y += lineHeight({ size: 7.5 });
      }
      this.y += 2;
      this.rule(0.3, "#dbd8ce");
      this.y += 2;
    }
    this.y += 4;
  }

  /** Finish: on every page the marks above and the foot with page x of y below. */
  async finish(foot: { left: string; marks: readonly string[] }): Promise<Buffer> {
    const { start, count } = this.doc.bufferedPageRange();
    for (let page = start; page < start + count; page += 1) {
      this.doc.switchToPage(page);
      const y = pageHeight - margin - 8;
      this.doc
        .save()
        .lineWidth(0.4)
        .strokeColor("#868276")
        .moveTo(margin, y - 4)
        .lineTo(pageWidth - margin, y - 4)
        .stroke()
        .restore();
      this.line(foot.left, margin, y, { size: 7.5, grey: true });
      const place = `Page ${page - start + 1} of ${count}`;
      this.line(place, pageWidth - margin - this.width(place, { size: 7.5 }), y, { size: 7.5, grey: true });
      foot.marks.forEach((mark, index) =>
        this.line(mark, margin, margin - 14 - index * 11, { size: 8.5, weight: "strong" }),
      );
    }
    const ended = new Promise<void>((resolve, reject) => {
      this.doc.on("end", resolve);
      this.doc.on("error", reject);
    });
    this.doc.end();
    await ended;
    return Buffer.concat(this.chunks);
  }

  private cell(text: string, left: number, width: number, style: TextStyle, align: Column["align"] = "left"): void {
    const x = align === "right" ? left + width - 6 - this.width(text, style) : left;
    this.line(text, x, this.y, style);
  }

  private rule(weight: number, color: string): void {
    this.doc
      .save()
      .lineWidth(weight)
      .strokeColor(color)
      .moveTo(margin, this.y)
      .lineTo(pageWidth - margin, this.y)
      .stroke()
      .restore();
  }

  private room(height: number): void {
    if (this.y + height > pageHeight - margin - footRoom) this.newPage();
  }

  private newPage(): void {
    this.doc.addPage();
    this.y = margin;
  }

  private use(face: Face, style: TextStyle): void {
    const name = faces[face][style.weight === "strong" ? 1 : 0];
    if (!this.registered.has(name)) {
      this.doc.registerFont(name, fontOf(name));
      this.registered.add(name);
    }
    this.doc.font(name).fontSize(style.size ?? 9);
  }

  private width(text: string, style: TextStyle): number {
    return runsOf(text).reduce((sum, run) => sum + this.runWidth(run, style), 0);
  }

  /** Widths grow with the size, so each text is laid out once a weight. */
  private runWidth(run: Run, style: TextStyle): number {
    const size = style.size ?? 9;
    if (run.face === null) return narrowGap * size;
    const key = `${style.weight ?? "regular"} ${run.face} ${run.text}`;
    let perPoint = widths.get(key);
    if (perPoint === undefined) {
      this.use(run.face, { ...style, size: 1 });
      perPoint = this.doc.widthOfString(run.text);
      if (widths.size >= MOST_WIDTHS) widths.clear();
      widths.set(key, perPoint);
    }
    return perPoint * size;
  }

  private line(text: string, x: number, y: number, style: TextStyle): void {
    let at = x;
    for (const run of runsOf(text)) {
      if (run.face !== null) {
        this.use(run.face, style);
        this.doc.fillColor(style.grey === true ? "#596171" : "#000000").text(run.text, at, y, { lineBreak: false });
      }
      at += this.runWidth(run, style);
    }
  }

  /** Lines no wider than `width`; a word that is wider is cut. */
  private wrap(text: string, width: number, style: TextStyle): string[] {
    const lines: string[] = [];
    for (const paragraph of text.split("\n")) {
      let line = "";
      for (let word of paragraph.split(" ")) {
        while (this.width(word, style) > width) {
          let fits = word.length - 1;
          while (fits > 1 && this.width(word.slice(0, fits), style) > width) fits -= 1;
          if (line !== "") lines.push(line);
          line = "";
          lines.push(word.slice(0, fits));
          word = word.slice(fits);
        }
        const longer = line === "" ? word : `${line} ${word}`;
        if (this.width(longer, style) <= width) line = longer;
        else {
          lines.push(line);
          line = word;
        }
      }
      lines.push(line);
    }
    return lines;
  }
}

const lineHeight = (style: TextStyle): number => (style.size ?? 9) * 1.38;
const textOf = (cell: string | Cell): string => (typeof cell === "string" ? cell : cell.text);
const weightOf = (cell: string | Cell): Weight =>
  typeof cell !== "string" && cell.strong === true ? "strong" : "regular";
