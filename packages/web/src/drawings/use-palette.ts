import { useMemo } from "react";
import { useTheme, type ThemeName } from "../shared/theme.ts";
import { useIsPrint } from "./use-print.ts";

const NAMES = [
  "ground",
  "ink",
  "quiet",
  "hairline",
  "graph",
  "accent",
  "near",
  "out",
  "band",
  "unseen-violet",
  "unseen-red",
] as const;
type TokenName = (typeof NAMES)[number];

export interface Palette {
  theme: ThemeName;
  /** True while the page is laid out for paper: black on white. */
  isPrint: boolean;
  colour: Record<TokenName, string>;
  /** A `var(--token)` as the colour that a canvas understands. */
  resolve: (css: string) => string;
}

function readPalette(theme: ThemeName, isPrint: boolean): Palette {
  const style = getComputedStyle(document.documentElement);
  const colour = Object.fromEntries(
    NAMES.map((name) => [name, style.getPropertyValue(`--${name}`).trim() || "#888888"]),
  ) as Record<TokenName, string>;
  const resolve = (css: string) => {
    const token = /^var\(--([\w-]+)\)$/.exec(css)?.[1];
    if (isPrint) return token === undefined ? "#000000" : (colour[token as TokenName] ?? "#000000");
    return token === undefined ? css : (colour[token as TokenName] ?? css);
  };
  return { theme, isPrint, colour, resolve };
}

/** The theme's colours for canvases, which know no CSS variables; followed through themes and printing. */
export function usePalette(): Palette {
  const theme = useTheme();
  const isPrint = useIsPrint();
  return useMemo(() => readPalette(theme, isPrint), [theme, isPrint]);
}
