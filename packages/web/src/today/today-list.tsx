/** What waits for this person, most urgent first: one filled button, the others outlined. */
import type { TodayReply } from "@wavekeep/api/contract";
import { Empty, LinkButton, StatusShape, statusWord, TextLink } from "../ui/index.ts";

type Item = TodayReply["items"][number];

/** A title with what is overdue in near, as everywhere. */
function ItemTitle({ title }: { title: string }) {
  const parts = title.split(/(overdue \d+ days?)/);
  return (
    <h3 className="strong">
      {parts.map((part, index) =>
        index % 2 === 1 ? (
          <span key={index} className="text-near">
            {part}
          </span>
        ) : (
          part
        ),
      )}
    </h3>
  );
}

export function TodayList({ items }: { items: readonly Item[] }) {
  if (items.length === 0)
    return (
      <Empty text="Nothing waits for you. Alerts, checks that fall due and reviews appear here, most urgent first." />
    );
  const first = items.findIndex((item) => item.action !== null);
  return (
    <ul className="book:-mt-1">
      {items.map((item, index) => (
        <li
          key={item.key}
          className="border-hairline flex flex-wrap items-start justify-between gap-x-8 gap-y-3 border-b py-4 first:pt-0 last:border-b-0 last:pb-0 book:flex-nowrap book:py-[14px]"
        >
          <div className="relative min-w-0 pl-7 book:pl-6">
            {item.state !== null && (
              <StatusShape state={item.state} label={statusWord(item.state)} className="absolute top-1 left-0" />
            )}
            <ItemTitle title={item.title} />
            <p className="text-quiet max-w-[720px]">{item.detail}</p>
          </div>
          <div className="flex flex-none flex-wrap items-center gap-4 pl-7 book:justify-end book:pl-0">
            {item.link !== null && (
              <TextLink to={item.link.to} className="order-2 book:order-none">
                {item.link.label}
              </TextLink>
            )}
            {item.action !== null && (
              <LinkButton to={item.action.to} filled={index === first}>
                {item.action.label}
              </LinkButton>
            )}
          </div>
        </li>
      ))}
    </ul>
  );
}
