/** The built-in line library, browsable by element and range. It ships with the core, so every version stays readable. */
import { builtInLineList, elementsOf, lineWavelengthNm, type LineList } from "@wavekeep/core";
import type { z } from "zod";
import type { lineListsReply, linesQuery, linesReply } from "../contract/sources.ts";
import { notFound } from "../http/problem.ts";
import { lineSourceCitations } from "./citations.ts";

/** Every version a result can name, newest first, with the day it was added. */
const lineLists: readonly { list: LineList; addedAt: string }[] = [
  { list: builtInLineList, addedAt: "2026-11-30T00:00:00.000Z" },
];

export function listLineLists(): z.input<typeof lineListsReply> {
  return {
    items: lineLists.map(({ list, addedAt }) => ({
      version: list.version,
      title: list.title,
      lineCount: list.lines.length,
      elements: elementsOf(list).map((element) => ({
        element,
        count: list.lines.filter((line) => line.element === element).length,
      })),
      sources: lineSourceCitations,
      addedAt,
    })),
  };
}

/** @throws problem "not-found" for a version that never was */
export function listLines(version: string, query: z.output<typeof linesQuery>): z.input<typeof linesReply> {
  const found = lineLists.find(({ list }) => list.version === version);
  if (found === undefined) throw notFound(`Version ${version} of the line library`);
  const { element, fromNm = 0, toNm = Number.POSITIVE_INFINITY } = query;
  const lines = found.list.lines.filter((line) => {
    const { wavelengthNm } = lineWavelengthNm(line);
    return (
      (element === undefined || line.element === element || line.spectrum === element) &&
      wavelengthNm >= fromNm &&
      wavelengthNm <= toNm
    );
  });
  return { version, lines };
}
