/** One instrument: its state and what comes, its drift, its last check; its dialogs are addresses (`?do=hold`). */
import type { Configuration, Instrument } from "@wavekeep/api/contract";
import type { ReactNode } from "react";
import { Navigate, useParams, useSearchParams } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { calledWords, kindWords } from "../shared/words.ts";
import {
  Button,
  formatNumber,
  LinkButton,
  NARROW_SPACE,
  Page,
  Section,
  Status,
  Switches,
  Tabs,
  TextLink,
  useMay,
} from "../ui/index.ts";
import { ChecksTab } from "./checks-tab.tsx";
import { DriftTab } from "./drift-tab.tsx";
import { HistoryTab } from "./history-tab.tsx";
import { InstrumentDialogs } from "./instrument-dialogs.tsx";
import { NextConfigurationForm } from "./next-configuration-form.tsx";
import { OpticsForm } from "./optics-form.tsx";
import { OpticsTab } from "./optics-tab.tsx";
import { OverviewTab } from "./overview-tab.tsx";
import { useInstrument } from "./queries.ts";

const tabs = ["checks", "drift", "optics", "history"] as const;
const tabWords: Record<(typeof tabs)[number], string> = {
  checks: "Checks",
  drift: "Drift",
  optics: "Optics and tolerance",
  history: "History",
};

export function InstrumentPage() {
  const { instrumentId = "", tab } = useParams();
  const [search] = useSearchParams();
  const instrument = useInstrument(instrumentId, search.get("configuration"));
  if (tab !== undefined && !(tabs as readonly string[]).includes(tab))
    return <Navigate to={`/instruments/${instrumentId}`} replace />;
  if (instrument.data === undefined) {
    return (
      <Page title={<span className="text-quiet">Instrument</span>} name="Instrument" aside="Instruments">
        <Section title="Drift">
          <Asked query={instrument} rows={8}>
            {() => null}
          </Asked>
        </Section>
      </Page>
    );
  }
  return <LoadedInstrument instrument={instrument.data} tab={tab as (typeof tabs)[number] | undefined} />;
}

function LoadedInstrument({ instrument, tab }: { instrument: Instrument; tab: (typeof tabs)[number] | undefined }) {
  const [search, setSearch] = useSearchParams();
  const may = useMay();
  const asked = search.get("configuration") ?? instrument.currentConfigurationId;
  // What state and sentence speak of: while another one is asked for, the one seen last stays whole.
  const configuration = instrument.configurations.find((item) => item.id === instrument.shownConfigurationId)!;
  const choices = [
    ...instrument.configurations.filter((item) => item.toOn === null),
    ...instrument.configurations.filter((item) => item.toOn !== null && item.id === asked),
  ];
  const called = calledWords({ instrumentName: instrument.name, configurationName: configuration.name });
  const doing = search.get("do");
  const goTo = (to: { configuration?: string | null; do?: string | null }, replace = false) =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before);
        for (const [key, value] of Object.entries(to)) {
          if (value === null) next.delete(key);
          else next.set(key, value);
        }
        return next;
      },
      { replace, preventScrollReset: replace },
    );
  const show = (what: string | null) => goTo({ do: what });
  const base = `/instruments/${instrument.id}`;
  const kept = search.get("configuration") === null ? "" : `?configuration=${configuration.id}`;
  const shownTabs = tabs.filter((item) => item !== "history" || may("records.read", { instrumentId: instrument.id }));
  const status = <Status state={instrument.state} word={stateWord(instrument, configuration)} />;
  const changes = may("instrument.change") && instrument.retiredAt === null && configuration.toOn === null;
  const forms = { instrument, configuration, onClose: () => show(null) };
  const onBegun = (reply: Instrument) => {
    const isOne = reply.configurations.filter((item) => item.toOn === null).length === 1;
    goTo({ do: null, configuration: isOne ? null : reply.shownConfigurationId });
  };
  const form = !changes ? null : doing === "replace" || doing === "add" ? (
    <NextConfigurationForm {...forms} key={doing} kind={doing} onBegun={onBegun} />
  ) : doing === "optics" ? (
    <OpticsForm {...forms} />
  ) : null;
  return (
    <Page
      name={called}
      title={called}
      status={status}
      aside={
        <>
          <span className="book:block">{kindWords[instrument.kind]}, </span>
          <span className="book:block">
            {formatNumber(configuration.rangeFirstNm)}–{formatNumber(configuration.rangeLastNm)}
            {NARROW_SPACE}nm,{" "}
          </span>
          <span className="book:block">
            {instrument.place === "" ? "" : `${instrument.place}, `}
            {instrument.owner.name}
          </span>
        </>
      }
      lead={instrument.prognosis}
      actions={form === null && <Actions instrument={instrument} configuration={configuration} show={show} />}
    >
      {form ?? (
        <>
          <div className="book mt-8">
            <div className={`book-margin no-print ${choices.length > 1 ? "mb-4 book:mb-0" : "hidden book:block"}`}>
              {choices.length > 1 && (
                <Switches
                  label="Configuration"
                  value={asked}
                  onChange={(id) => goTo({ configuration: id, do: null }, true)}
                  choices={choices.map((item) => ({ value: item.id, label: switchWord(item) }))}
                />
              )}
            </div>
            <div className="book-body">
              <Tabs
                label={`Pages of ${instrument.name}`}
                items={[
                  { to: `${base}${kept}`, label: "Overview" },
                  ...shownTabs.map((item) => ({ to: `${base}/${item}${kept}`, label: tabWords[item] })),
                ]}
              />
            </div>
          </div>
          <TabMatter instrument={instrument} configuration={configuration} tab={tab} show={show} />
        </>
      )}
      <InstrumentDialogs {...forms} doing={doing} onEnded={() => goTo({ do: null, configuration: null })} />
    </Page>
  );
}

interface PartProps {
  instrument: Instrument;
  configuration: Configuration;
  show: (what: string | null) => void;
}

function TabMatter({
  instrument,
  configuration,
  tab,
  show,
}: PartProps & { tab: (typeof tabs)[number] | undefined }): ReactNode {
  if (tab === "checks") return <ChecksTab instrument={instrument} configuration={configuration} />;
  if (tab === "drift") return <DriftTab configuration={configuration} instrument={instrument} show={show} />;
  if (tab === "optics") return <OpticsTab instrument={instrument} configuration={configuration} show={show} />;
  if (tab === "history") return <HistoryTab instrument={instrument} />;
  return <OverviewTab instrument={instrument} configuration={configuration} show={show} />;
}

/** What is said in place of the state's own word. */
function stateWord(instrument: Instrument, configuration: Configuration): string | undefined {
  if (instrument.retiredAt === null && configuration.toOn !== null) return "ended";
  return instrument.state === "restricted" && instrument.restriction !== null
    ? `restricted to ${instrument.restriction}`
    : undefined;
}

/** Its name; one that has ended says so. */
const switchWord = (item: Configuration) =>
  item.toOn === null ? (item.name ?? "present") : `${item.name ?? "the one before"}, ended`;

/** What may be done here now: the decision on a hold goes first, then a check. */
function Actions({ instrument, configuration, show }: PartProps) {
  const may = useMay();
  if (instrument.retiredAt !== null || configuration.toOn !== null) return null;
  const awaitsDecision = configuration.standing.standing === "on-hold";
  const decides = awaitsDecision && may("standing.change");
  const checks = may("check.begin");
  return (
    <>
      {may("event.log", { instrumentId: instrument.id }) && <Button onClick={() => show("event")}>Log an event</Button>}
      {checks &&
        (instrument.openDraft !== null ? (
          <LinkButton to={`/checks/${instrument.openDraft.id}/edit`} filled={!decides}>
            Go on with {instrument.openDraft.number}
          </LinkButton>
        ) : (
          <LinkButton to={`/checks/new?configuration=${configuration.id}`} filled={!decides}>
            Start a check
          </LinkButton>
        ))}
      {decides && (
        <Button filled onClick={() => show("hold")}>
          Confirm or lift the hold
        </Button>
      )}
      {instrument.openAlertCount > 0 && !checks && !decides && (
        <TextLink to={`/alerts?instrument=${instrument.id}`}>Alerts</TextLink>
      )}
    </>
  );
}
