import { expect, test } from "vitest";
import { csvCell, toCsv } from "./csv.ts";

test.each(["=1+1", "+cmd", "-2+3", "@SUM(A1)", "\tx", "−5"])(
  "text %j cannot act as a formula in a spreadsheet",
  (text) => {
    expect(csvCell(text)).toBe(`"'${text}"`);
  },
);

test("numbers stay numbers, with an ASCII minus", () => {
  expect(csvCell(-0.144)).toBe("-0.144");
  expect(csvCell(null)).toBe("");
  expect(csvCell(Number.NaN)).toBe("");
});

test("quotes, commas and line ends are quoted (RFC 4180 section 2)", () => {
  expect(
    toCsv({
      head: ["a", 'b "c"'],
      rows: [
        ["1,2", "x\ny"],
        ["plain", 3],
      ],
    }),
  ).toBe('a,"b ""c"""\r\n"1,2","x\ny"\r\nplain,3\r\n');
});
