/** The theme by name; each is shown at once and remembered on this device. */
import { chooseTheme, themeNames, themeWords, useTheme } from "../shared/theme.ts";
import { Menu } from "./menu.tsx";

export function ThemeMenu({ className, align = "right" }: { className?: string; align?: "left" | "right" }) {
  const theme = useTheme();
  return (
    <Menu
      label={`Theme: ${themeWords[theme]}`}
      className={className ?? "text-quiet hover:text-ink"}
      align={align}
      groups={[
        {
          items: themeNames.map((name) => ({
            key: name,
            label: themeWords[name],
            chosen: name === theme,
            onChoose: () => chooseTheme(name),
          })),
          note: "Dark room keeps the eye’s adaptation: near-black and dim. It does not make a screen safe for an open detector; choose a hue away from the band being measured.",
        },
      ]}
    />
  );
}
