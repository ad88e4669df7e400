import type { StripLine } from "@wavekeep/api/contract";
import { cleanup, fireEvent, render, screen } from "@testing-library/react";
import { afterEach, expect, test, vi } from "vitest";
import { LineStrip } from "./line-strip.tsx";
import { ToleranceUsed } from "./tolerance-used.tsx";

afterEach(cleanup);

const line = (wavelengthNm: number, errorNm: number, over: Partial<StripLine> = {}): StripLine => ({
  wavelengthNm,
  species: "Hg I",
  errorNm,
  expandedUncNm: 0.03,
  toleranceNm: 0.4,
  status: "judged",
  verdict: "pass",
  nearLimit: false,
  flags: [],
  blend: false,
  ...over,
});
const lines = [
  line(404.6565, 0.1),
  line(546.075, 0.2, { status: "refused", verdict: null, flags: ["saturated"] }),
  line(579.067, 0.5, { verdict: "fail" }),
];

test("a strip says in words what it shows", () => {
  render(<LineStrip lines={lines} fromNm={350} toNm={650} size="mini" />);
  expect(screen.getByRole("img").getAttribute("aria-label")).toBe(
    "2 of 3 lines judged; the worst, Hg 579.07 nm, reads +0.500\u00a0±\u00a00.030\u202fnm and uses 125\u202f% of its tolerance.",
  );
});

test("an instrument without a check shows the ruler alone", () => {
  const { container } = render(<LineStrip lines={[]} fromNm={350} toNm={650} size="mini" />);
  expect(container.querySelectorAll("line, rect")).toHaveLength(0);
  expect(screen.getByRole("img").getAttribute("aria-label")).toBe("No check yet: no lines.");
});

test("one tab stop: arrows go from line to line, Enter opens, Esc leaves", () => {
  const onChoose = vi.fn();
  const onOpen = vi.fn();
  const { rerender } = render(
    <LineStrip lines={lines} fromNm={350} toNm={650} size="large" chosen={null} onChoose={onChoose} onOpen={onOpen} />,
  );
  const drawing = screen.getByRole("group");
  expect(drawing.tabIndex).toBe(0);
  expect(drawing.querySelectorAll("[tabindex]")).toHaveLength(0);
  fireEvent.keyDown(drawing, { key: "ArrowRight" });
  expect(onChoose).toHaveBeenLastCalledWith(0);
  rerender(
    <LineStrip lines={lines} fromNm={350} toNm={650} size="large" chosen={0} onChoose={onChoose} onOpen={onOpen} />,
  );
  expect(drawing.textContent).toContain("Hg 404.66 nm: +0.100\u00a0±\u00a00.030\u202fnm, in tolerance.");
  fireEvent.keyDown(drawing, { key: "End" });
  expect(onChoose).toHaveBeenLastCalledWith(2);
  fireEvent.keyDown(drawing, { key: "Enter" });
  expect(onOpen).toHaveBeenLastCalledWith(0);
  fireEvent.keyDown(drawing, { key: "Escape" });
  expect(onChoose).toHaveBeenLastCalledWith(null);
});

test("flags name what is saturated and frame the worst until a line is chosen", () => {
  const { container } = render(<LineStrip lines={lines} fromNm={350} toNm={650} size="large" />);
  expect(container.textContent).toContain("Hg sat.");
  expect(container.querySelector(".mark-strong")?.textContent).toBe("579.07");
});

test("over 100 % the meter is full and a square stands beyond it", () => {
  const { container } = render(<ToleranceUsed used={1.09} guardShare={0.08} />);
  expect(container.textContent).toBe("109\u202f%");
  const widths = [...container.querySelectorAll("rect")].map((rect) => rect.getAttribute("width"));
  expect(widths).toContain("64");
  expect(widths).toContain("7");
});
