/** A door of Wavekeep: one short form in the gap between mercury's 436 and 546 nm. */
import { useSyncExternalStore, type ReactNode } from "react";
import { ThemeMenu } from "../ui/theme-menu.tsx";
import { useTitle } from "../ui/use-title.ts";
import { MercuryGround } from "./mercury-ground.tsx";

const subscribe = (listener: () => void) => {
  window.addEventListener("resize", listener);
  return () => window.removeEventListener("resize", listener);
};

interface DoorProps {
  title: string;
  children: ReactNode;
  /** Beyond the yellow lines: demo people. */
  beside?: ReactNode;
}

export function Door({ title, children, beside }: DoorProps) {
  useTitle(title);
  // On a narrow window the lines stand below the form, as on the edge of a page.
  const height = useSyncExternalStore(subscribe, () => (window.innerWidth < 1024 ? 190 : window.innerHeight));
  return (
    <div className="door">
      <div className="door-ground">
        <MercuryGround height={height} />
      </div>
      <div className="absolute top-[17px] right-4 z-10 rail:right-10">
        <ThemeMenu />
      </div>
      <main className="door-form">
        <p className="type-lead strong">Wavekeep</p>
        <h1 className="type-display mt-6 rail:mt-14">{title}</h1>
        <div className="mt-6">{children}</div>
      </main>
      {beside !== undefined && <aside className="door-beside">{beside}</aside>}
    </div>
  );
}
