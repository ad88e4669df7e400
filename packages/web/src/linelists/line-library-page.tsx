/** The line library: every reference line with its uncertainty and source, in air or vacuum. */
import type { z } from "zod";
import type { listedLine } from "@wavekeep/api/contract";
import { wavelengthHue } from "../drawings/index.ts";
import { Asked } from "../shared/asked.tsx";
import { Filters, FilterSelect } from "../shared/filter-select.tsx";
import { useTheme } from "../shared/theme.ts";
import { useUrlFilter } from "../shared/use-url-filter.ts";
import {
  Decimal,
  Empty,
  formatCount,
  formatNumber,
  NARROW_SPACE,
  Page,
  Section,
  Switches,
  Table,
  TextLink,
  When,
} from "../ui/index.ts";
import { useLineLists, useLines } from "./queries.ts";

type Line = z.infer<typeof listedLine>;
const filters = ["version", "element", "medium"] as const;

/** Places that the line's uncertainty supports: one digit below it, at most six. */
function placesOf(line: Line): number {
  if (line.uncertaintyNm === null || line.uncertaintyNm <= 0) return 4;
  return Math.min(6, Math.max(2, Math.ceil(-Math.log10(line.uncertaintyNm)) + 1));
}

export function LineLibraryPage() {
  const lists = useLineLists();
  const [filter, setFilter] = useUrlFilter(filters);
  const medium = filter.medium === "vacuum" ? "vacuum" : "air";
  const list = lists.data?.items.find((item) => item.version === filter.version) ?? lists.data?.items[0];
  const lines = useLines(list?.version, filter.element);
  const theme = useTheme();
  const value = (line: Line) => (medium === "vacuum" ? line.wavelengthVacuumNm : line.wavelengthAirNm);
  const shown = [...(lines.data?.lines ?? [])].sort((a, b) => a.wavelengthVacuumNm - b.wavelengthVacuumNm);
  const places = Math.max(2, ...shown.map(placesOf));
  const citation = (key: string) => list?.sources.find((source) => source.key === key)?.citation ?? key;
  return (
    <Page
      name="Line library"
      title={
        list === undefined ? "Line library" : `${formatCount(list.lineCount)} reference lines, version ${list.version}.`
      }
      aside={<TextLink to="/sources">Sources</TextLink>}
      lead={list?.title}
    >
      <Section
        title="Lines"
        note={medium === "air" ? "nm in standard air (15 °C, 101 325 Pa, dry); none below 200 nm." : "nm in vacuum."}
        switches={
          <>
            <Switches
              label="Medium"
              value={medium}
              onChange={(next) => setFilter("medium", next === "air" ? null : next)}
              choices={[
                { value: "air", label: "in air" },
                { value: "vacuum", label: "in vacuum" },
              ]}
            />
            <div className="mt-2">
              <Filters>
                <FilterSelect
                  label="Element"
                  every="Every element"
                  value={filter.element}
                  onChange={(next) => setFilter("element", next)}
                  choices={(list?.elements ?? []).map(({ element, count }) => ({
                    value: element,
                    label: `${element}, ${count}`,
                  }))}
                />
                {(lists.data?.items.length ?? 0) > 1 && (
                  <FilterSelect
                    label="Version"
                    every={`Version ${lists.data?.items[0]?.version}`}
                    value={filter.version}
                    onChange={(next) => setFilter("version", next)}
                    choices={(lists.data?.items ?? [])
                      .slice(1)
                      .map((item) => ({ value: item.version, label: `Version ${item.version}` }))}
                  />
                )}
              </Filters>
            </div>
          </>
        }
      >
        <Asked query={lists} rows={3}>
          {(reply) => (reply.items.length === 0 ? <Empty text="No version of the library is here yet." /> : null)}
        </Asked>
        {list !== undefined && (
          <Asked query={lines} rows={16}>
            {() =>
              shown.length === 0 ? (
                <Empty text="No line of this element is in the library." />
              ) : (
                <Table
                  caption={`Reference lines in ${medium}`}
                  compact
                  rows={shown}
                  rowKey={(line) => `${line.spectrum} ${line.wavelengthVacuumNm}`}
                  tick={(line) => wavelengthHue(line.wavelengthVacuumNm, theme)}
                  columns={[
                    {
                      key: "wavelength",
                      head: `Wavelength in ${medium}, nm`,
                      cell: (line) => (
                        <span className="inline-block min-w-[12ch] text-right">
                          <Decimal value={value(line)} decimals={placesOf(line)} columnDecimals={places} />
                        </span>
                      ),
                    },
                    { key: "spectrum", head: "Spectrum", cell: (line) => line.spectrum },
                    {
                      key: "u",
                      head: "u, pm",
                      numbers: true,
                      cell: (line) =>
                        line.uncertaintyNm === null ? (
                          <i className="text-quiet">1 assumed</i>
                        ) : (
                          formatNumber(line.uncertaintyNm * 1000, { decimals: line.uncertaintyNm < 0.0001 ? 3 : 2 })
                        ),
                    },
                    {
                      key: "intensity",
                      head: "Relative intensity",
                      numbers: true,
                      className: "hidden rail:table-cell",
                      cell: (line) => (line.relativeIntensity === null ? "–" : formatCount(line.relativeIntensity)),
                    },
                    {
                      key: "source",
                      head: "Source",
                      cell: (line) => <span title={citation(line.source)}>{line.source}</span>,
                    },
                  ]}
                  rowNote={(line) => (line.note === "" ? null : line.note)}
                  narrow={(line) => (
                    <div className="flex items-baseline justify-between gap-3">
                      <span className="relative pl-3">
                        <span
                          aria-hidden="true"
                          className="absolute top-1 left-0 h-[13px] w-[2px]"
                          style={{ background: wavelengthHue(line.wavelengthVacuumNm, theme) }}
                        />
                        <b>{formatNumber(value(line), { decimals: placesOf(line) })}</b>{" "}
                        <span className="text-quiet">{line.spectrum}</span>
                      </span>
                      <span className="type-note">
                        {line.uncertaintyNm === null
                          ? "u assumed"
                          : `u ${formatNumber(line.uncertaintyNm * 1000, { decimals: 2 })}${NARROW_SPACE}pm`}
                        , {line.source}
                      </span>
                    </div>
                  )}
                />
              )
            }
          </Asked>
        )}
      </Section>
      {list !== undefined && (
        <Section
          title="Sources"
          note="Each value names where it comes from; an edition that changes a value is a new version, and old results keep theirs."
        >
          <dl className="grid max-w-[720px] grid-cols-[auto_minmax(0,1fr)] gap-x-6 gap-y-2">
            {list.sources.map((source) => (
              <div key={source.key} className="contents">
                <dt className="strong">{source.key}</dt>
                <dd className="break-words">{source.citation}</dd>
              </div>
            ))}
          </dl>
          <p className="type-note mt-3">
            In the library since <When at={list.addedAt} as="day" />.
          </p>
        </Section>
      )}
    </Page>
  );
}
