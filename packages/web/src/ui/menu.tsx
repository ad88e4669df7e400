/** A menu behind a word: opens below it, arrows go through it, Esc closes it and gives the focus back. */
import { useEffect, useId, useRef, useState, type KeyboardEvent, type ReactNode } from "react";

export interface MenuItem {
  key: string;
  label: ReactNode;
  /** Chosen among its kind: strong, and said so. */
  chosen?: boolean;
  onChoose: () => void;
}

export interface MenuGroup {
  label?: string;
  /** A short word of warning or help below the group's items. */
  note?: ReactNode;
  items: readonly MenuItem[];
}

interface MenuProps {
  /** What is shown closed. */
  label: ReactNode;
  groups: readonly MenuGroup[];
  className?: string;
  align?: "left" | "right";
}

export function Menu({ label, groups, className, align = "right" }: MenuProps) {
  const [isOpen, setOpen] = useState(false);
  const id = useId();
  const root = useRef<HTMLDivElement>(null);
  const list = useRef<HTMLDivElement>(null);
  useEffect(() => {
    if (!isOpen) return undefined;
    const items = list.current?.querySelectorAll<HTMLElement>(".menu-item");
    (list.current?.querySelector<HTMLElement>('.menu-item[data-chosen="true"]') ?? items?.[0])?.focus();
    const outside = (event: PointerEvent) => {
      if (root.current?.contains(event.target as Node) !== true) setOpen(false);
    };
    document.addEventListener("pointerdown", outside);
    return () => document.removeEventListener("pointerdown", outside);
  }, [isOpen]);
  const close = () => {
    setOpen(false);
    root.current?.querySelector<HTMLElement>("button")?.focus();
  };
  const press = (event: KeyboardEvent) => {
    if (!isOpen) {
      if (event.key === "ArrowDown") {
        event.preventDefault();
        setOpen(true);
      }
      return;
    }
    const items = [...(list.current?.querySelectorAll<HTMLElement>(".menu-item") ?? [])];
    const at = items.indexOf(document.activeElement as HTMLElement);
    const go = (to: number) => {
      event.preventDefault();
      items[(to + items.length) % items.length]?.focus();
    };
    if (event.key === "Escape") {
      event.preventDefault();
      event.stopPropagation();
      close();
    } else if (event.key === "ArrowDown") go(at + 1);
    else if (event.key === "ArrowUp") go(at - 1);
    else if (event.key === "Home") go(0);
    else if (event.key === "End") go(-1);
    else if (event.key === "Tab") setOpen(false);
  };
  return (
    <div ref={root} className="relative" onKeyDown={press}>
      <button
        type="button"
        aria-haspopup="menu"
        aria-expanded={isOpen}
        aria-controls={isOpen ? id : undefined}
        className={className}
        onClick={() => setOpen(!isOpen)}
      >
        {label}
      </button>
      {isOpen && (
        <div
          ref={list}
          id={id}
          role="menu"
          aria-label={typeof label === "string" ? label : undefined}
          className={`menu absolute top-full mt-2 w-max max-w-[min(300px,calc(100vw-32px))] ${align === "right" ? "right-0" : "left-0"}`}
        >
          {groups.map((group, index) => (
            <div
              key={group.label ?? index}
              role="group"
              aria-label={group.label}
              className={index === 0 ? "" : "border-hairline mt-2 border-t pt-2"}
            >
              {group.label !== undefined && <div className="type-label menu-label">{group.label}</div>}
              {group.items.map((item) => (
                <button
                  key={item.key}
                  type="button"
                  role={item.chosen === undefined ? "menuitem" : "menuitemradio"}
                  aria-checked={item.chosen}
                  data-chosen={item.chosen}
                  tabIndex={-1}
                  className="menu-item"
                  onClick={() => {
                    close();
                    item.onChoose();
                  }}
                >
                  {item.label}
                </button>
              ))}
              {group.note !== undefined && <p className="type-note px-4 pt-1 pb-1">{group.note}</p>}
            </div>
          ))}
        </div>
      )}
    </div>
  );
}
