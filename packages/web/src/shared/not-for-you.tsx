/** What stands in the place of a page that this member's roles do not open. */
import { LinkButton, Page } from "../ui/index.ts";

/** @param who  whose job it is, e.g. `a lab manager` */
export function NotForYou({ title, who }: { title: string; who: string }) {
  return (
    <Page
      title={title}
      lead={`This is done by ${who}. Nothing was changed.`}
      actions={<LinkButton to="/today">Today</LinkButton>}
    />
  );
}
