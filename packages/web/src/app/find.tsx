/** Find over instruments, check numbers and people. `/` goes there from anywhere; arrows and Enter go on from it. */
import { useQuery } from "@tanstack/react-query";
import { useDeferredValue, useEffect, useId, useRef, useState, type KeyboardEvent } from "react";
import { useNavigate } from "react-router";
import { searchQuery } from "../shared/queries.ts";

const isTyping = (target: EventTarget | null) =>
  target instanceof HTMLElement && (target.isContentEditable || /^(INPUT|TEXTAREA|SELECT)$/.test(target.tagName));

export function Find({
  className,
  autoFocus = false,
  onDone,
}: {
  className?: string;
  autoFocus?: boolean;
  onDone?: () => void;
}) {
  const [text, setText] = useState("");
  const [isOpen, setOpen] = useState(false);
  const [at, setAt] = useState(0);
  const input = useRef<HTMLInputElement>(null);
  const id = useId();
  const navigate = useNavigate();
  const asked = useDeferredValue(text.trim());
  const { data } = useQuery(searchQuery(asked));
  const hits = asked === "" ? [] : (data?.hits ?? []);
  const current = Math.min(at, Math.max(hits.length - 1, 0));

  useEffect(() => {
    const press = (event: globalThis.KeyboardEvent) => {
      if (event.key !== "/" || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return;
      if (input.current?.offsetParent === null) return;
      event.preventDefault();
      input.current?.focus();
    };
    document.addEventListener("keydown", press);
    return () => document.removeEventListener("keydown", press);
  }, []);

  const leave = () => {
    setOpen(false);
    setText("");
    setAt(0);
    input.current?.blur();
    onDone?.();
  };
  const open = (to: string | undefined) => {
    if (to === undefined) return;
    leave();
    void navigate(to);
  };
  const press = (event: KeyboardEvent) => {
    if (event.key === "Escape") leave();
    else if (event.key === "ArrowDown") setAt(Math.min(current + 1, hits.length - 1));
    else if (event.key === "ArrowUp") setAt(Math.max(current - 1, 0));
    else if (event.key === "Enter") open(hits[current]?.to);
    else return;
    event.preventDefault();
  };
  const showsList = isOpen && asked !== "";
  return (
    <div className={`relative ${className ?? ""}`}>
      <input
        ref={input}
        type="text"
        role="combobox"
        aria-label="Find an instrument, check number or person"
        aria-expanded={showsList}
        aria-controls={`${id}-list`}
        aria-activedescendant={showsList && hits.length > 0 ? `${id}-${current}` : undefined}
        aria-autocomplete="list"
        autoComplete="off"
        spellCheck={false}
        autoFocus={autoFocus}
        placeholder="Find an instrument, check number or person"
        className="find-input"
        value={text}
        onChange={(event) => {
          setText(event.target.value);
          setAt(0);
          setOpen(true);
        }}
        onFocus={() => setOpen(true)}
        onBlur={() => setOpen(false)}
        onKeyDown={press}
      />
      <kbd aria-hidden="true" className="find-key">
        /
      </kbd>
      <ul
        id={`${id}-list`}
        role="listbox"
        aria-label="Found"
        hidden={!showsList}
        className="menu absolute top-full left-[-16px] mt-2 max-h-[60vh] w-[360px] max-w-[calc(100vw-32px)] overflow-y-auto"
      >
        {hits.map((hit, index) => (
          <li
            key={`${hit.kind} ${hit.to} ${hit.label}`}
            id={`${id}-${index}`}
            role="option"
            aria-selected={index === current}
            data-highlighted={index === current || undefined}
            className="menu-item"
            onPointerDown={(event) => event.preventDefault()}
            onClick={() => open(hit.to)}
            onPointerEnter={() => setAt(index)}
          >
            <span className="strong">{hit.label}</span> <span className="type-note">{hit.note}</span>
          </li>
        ))}
        {data !== undefined && hits.length === 0 && (
          <li role="option" aria-selected="false" aria-disabled="true" className="text-quiet px-4 py-1.5">
            Nothing by that name.
          </li>
        )}
      </ul>
    </div>
  );
}
