/** The shelf of reference sources: what they are, whether their review is in time. */
import type { Source } from "@wavekeep/api/contract";
import { sourceKind } from "@wavekeep/api/contract";
import { Link } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { Filters, FilterSelect } from "../shared/filter-select.tsx";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import { counted, countWord, sentenceCase, sourceKindWords } from "../shared/words.ts";
import { Due, Empty, LinkButton, Page, Section, Table, TextButton, TextLink, useMay } from "../ui/index.ts";
import { useSources } from "./queries.ts";

const filters = ["kind", "element", "retired"] as const;

/** `Six sources on the shelf; one is past its review.` */
export function shelfSentence(sources: readonly Source[]): string {
  const inUse = sources.filter((source) => source.retiredAt === null);
  if (inUse.length === 0) return "No source is on the shelf yet.";
  const past = inUse.filter((source) => source.reviewDueDays !== null && source.reviewDueDays < 0).length;
  const head = `${sentenceCase(countWord(inUse.length))} ${inUse.length === 1 ? "source" : "sources"} on the shelf`;
  return past === 0
    ? `${head}, all in review.`
    : `${head}; ${countWord(past)} ${past === 1 ? "is" : "are"} past review.`;
}

const whatShines = (source: Source) =>
  source.elements.length > 0
    ? source.elements.join(", ")
    : source.laserLineNm === null
      ? "–"
      : `${source.laserLineNm} nm`;

function Review({ source }: { source: Source }) {
  if (source.retiredAt !== null) return <span className="text-quiet">retired</span>;
  if (source.reviewDueOn === null || source.reviewDueDays === null) return <span className="text-quiet">no date</span>;
  return <Due on={source.reviewDueOn} days={source.reviewDueDays} />;
}

export function SourcesPage() {
  const sources = useSources();
  const may = useMay();
  const [filter, setFilter, clear] = useUrlFilter(filters);
  const all = sources.data?.items ?? [];
  const shown = all
    .filter(
      (source) =>
        (filter.kind === undefined || source.kind === filter.kind) &&
        (filter.element === undefined || source.elements.includes(filter.element)) &&
        (filter.retired === "shown" || source.retiredAt === null),
    )
    .sort((a, b) => (a.label < b.label ? -1 : 1));
  const elements = [...new Set(all.flatMap((source) => source.elements))].sort();
  const register = may("source.change") && (
    <LinkButton to="/sources/new" filled>
      Register a source
    </LinkButton>
  );
  return (
    <Page
      name="Sources"
      title={sources.data === undefined ? "Sources" : shelfSentence(all)}
      aside="Sources"
      actions={all.length > 0 ? register : undefined}
    >
      <Section
        title="Shelf"
        note="Lamps, lasers and built-in lines, each with its certificate and the cautions that stand where it is chosen."
        switches={
          <Filters>
            <FilterSelect
              label="Kind"
              every="Every kind"
              value={filter.kind}
              onChange={(value) => setFilter("kind", value)}
              choices={sourceKind.options.map((kind) => ({ value: kind, label: sentenceCase(sourceKindWords[kind]) }))}
            />
            <FilterSelect
              label="Element"
              every="Every element"
              value={filter.element}
              onChange={(value) => setFilter("element", value)}
              choices={elements.map((element) => ({ value: element, label: element }))}
            />
            <FilterSelect
              label="Retired sources"
              every="Without retired"
              value={filter.retired}
              onChange={(value) => setFilter("retired", value)}
              choices={[{ value: "shown", label: "With retired" }]}
            />
          </Filters>
        }
        links={<TextLink to="/sources/lines">Line library</TextLink>}
      >
        <Asked query={sources} rows={6}>
          {() =>
            shown.length > 0 ? (
              <Table
                caption="Reference sources"
                rows={shown}
                rowKey={(source) => source.id}
                columns={[
                  {
                    key: "label",
                    head: "Label",
                    className: "whitespace-nowrap",
                    cell: (source) => (
                      <Link to={`/sources/${source.id}`} className="strong hover:underline">
                        {source.label}
                      </Link>
                    ),
                  },
                  {
                    key: "name",
                    head: "Source",
                    cell: (source) => (
                      <>
                        {source.name}{" "}
                        <span className="type-note">
                          {source.builtIntoInstrumentName === null
                            ? sourceKindWords[source.kind]
                            : `built into ${source.builtIntoInstrumentName}`}
                        </span>
                      </>
                    ),
                  },
                  { key: "lines", head: "Lines of", cell: whatShines },
                  {
                    key: "serial",
                    head: "Serial number",
                    className: "hidden wide:table-cell",
                    cell: (source) => source.serial || "–",
                  },
                  {
                    key: "certificate",
                    head: "Certificate",
                    className: "hidden rail:table-cell",
                    cell: (source) =>
                      source.certificate === null ? <span className="text-quiet">none stored</span> : "stored",
                  },
                  {
                    key: "used",
                    head: "Used in",
                    className: "hidden rail:table-cell",
                    cell: (source) => counted(source.usedInChecks, "check"),
                  },
                  {
                    key: "review",
                    head: "Review",
                    className: "whitespace-nowrap",
                    cell: (source) => <Review source={source} />,
                  },
                ]}
                narrow={(source) => (
                  <Link to={`/sources/${source.id}`} className="block py-1">
                    <span className="flex items-baseline justify-between gap-3">
                      <span>
                        <b>{source.label}</b> <span className="type-note">{source.name}</span>
                      </span>
                      <span>{whatShines(source)}</span>
                    </span>
                    <span className="type-note flex justify-between gap-3">
                      <span>{sourceKindWords[source.kind]}</span>
                      <Review source={source} />
                    </span>
                  </Link>
                )}
              />
            ) : all.length > 0 ? (
              <Empty text="No source fits these filters." action={<TextButton onClick={clear}>Show all</TextButton>} />
            ) : (
              <Empty
                text="The lamps and lasers that checks are made with stand here. A check names its source, so the first one is registered before the first check."
                action={register}
              />
            )
          }
        </Asked>
      </Section>
    </Page>
  );
}
