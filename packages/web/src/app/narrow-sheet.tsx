/** The rail, the theme and the person on a narrow window: a sheet over the page. */
import { Dialog as Radix } from "radix-ui";
import { useMe } from "../shared/session.ts";
import { DialogSheet } from "../ui/dialog.tsx";
import type { MenuGroup } from "../ui/menu.tsx";
import { ThemeMenu } from "../ui/theme-menu.tsx";
import { Find } from "./find.tsx";
import { roleWord } from "./places.ts";
import { RailLinks } from "./rail.tsx";

export function NarrowSheet({
  shows,
  groups,
  onClose,
}: {
  shows: "menu" | "find";
  groups: readonly MenuGroup[];
  onClose: () => void;
}) {
  const me = useMe();
  return (
    <Radix.Root open onOpenChange={(next) => !next && onClose()}>
      <Radix.Portal>
        <DialogSheet className="shell-sheet" described={false}>
          <div className="flex items-baseline justify-between">
            <Radix.Title className="type-label">
              {shows === "find" ? "Find" : `${me.lab.name}${me.lab.isDemo ? ", demo" : ""}`}
            </Radix.Title>
            <Radix.Close className="text-accent">Close</Radix.Close>
          </div>
          {shows === "find" ? (
            <Find autoFocus onDone={onClose} className="mt-4" />
          ) : (
            <MenuSheet groups={groups} onClose={onClose} />
          )}
        </DialogSheet>
      </Radix.Portal>
    </Radix.Root>
  );
}

function MenuSheet({ groups, onClose }: { groups: readonly MenuGroup[]; onClose: () => void }) {
  const me = useMe();
  return (
    <>
      <nav aria-label="Pages" className="mt-3">
        <RailLinks onFollow={onClose} />
      </nav>
      <div className="border-hairline mt-4 border-t pt-5 pb-2">
        <ThemeMenu className="text-quiet" align="left" />
      </div>
      <div className="border-hairline mt-3 border-t pt-3">
        <p className="text-quiet py-2">{`${me.person.name}, ${roleWord(me)}`}</p>
        {groups.map((group, index) => (
          <div key={group.label ?? index}>
            {group.label !== undefined && <p className="type-label pt-2">{group.label}</p>}
            {group.items.map((item) => (
              <button
                key={item.key}
                type="button"
                className="text-accent block min-h-11 w-full text-left"
                onClick={() => {
                  onClose();
                  item.onChoose();
                }}
              >
                {item.label}
              </button>
            ))}
          </div>
        ))}
      </div>
    </>
  );
}
