/** One instrument: its state and what comes, its drift, its last check; its dialogs are addresses (`?do=hold`). */
import type { Configuration, Instrument } from "@wavekeep/api/contract";
import type { ReactNode } from "react";
import { Navigate, useParams, useSearchParams } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { kindWords } from "../shared/words.ts";
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
  const instrument = useInstrument(instrumentId);
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
  const open = instrument.configurations.filter((item) => item.toOn === null);
  const configuration =
    instrument.configurations.find((item) => item.id === search.get("configuration")) ??
    instrument.configurations.find((item) => item.id === instrument.currentConfigurationId) ??
    instrument.configurations[0];
  if (configuration === undefined) return <Page title={instrument.name} lead="It has no configuration yet." />;
  const doing = search.get("do");
  const show = (what: string | null) =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      if (what === null) next.delete("do");
      else next.set("do", what);
      return next;
    });
  const base = `/instruments/${instrument.id}`;
  const kept = search.get("configuration") === null ? "" : `?configuration=${configuration.id}`;
  const shownTabs = tabs.filter((item) => item !== "history" || may("records.read", { instrumentId: instrument.id }));
  const status = (
    <Status
      state={instrument.state}
      word={
        instrument.state === "restricted" && instrument.restriction !== null
          ? `restricted to ${instrument.restriction}`
          : undefined
      }
    />
  );
  const changes = may("instrument.change") && instrument.retiredAt === null;
  const forms = { instrument, configuration, onClose: () => show(null) };
  const form = !changes ? null : doing === "next" ? (
    <NextConfigurationForm {...forms} />
  ) : doing === "optics" ? (
    <OpticsForm {...forms} />
  ) : null;
  return (
    <Page
      name={instrument.name}
      title={instrument.name}
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
            <div className="book-margin hidden book:block">
              {open.length > 1 && (
                <Switches
                  label="Configuration"
                  value={configuration.id}
                  onChange={(id) => setSearch({ configuration: id }, { replace: true })}
                  choices={open.map((item, index) => ({
                    value: item.id,
                    label: item.name ?? `configuration ${index + 1}`,
                  }))}
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
      <InstrumentDialogs {...forms} doing={doing} />
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
  if (tab === "checks") return <ChecksTab instrument={instrument} />;
  if (tab === "drift") return <DriftTab configuration={configuration} instrument={instrument} show={show} />;
  if (tab === "optics") return <OpticsTab instrument={instrument} configuration={configuration} show={show} />;
  if (tab === "history") return <HistoryTab instrument={instrument} />;
  return <OverviewTab instrument={instrument} configuration={configuration} show={show} />;
}

/** What may be done here now: the decision on a hold goes first, then a check. */
function Actions({ instrument, configuration, show }: PartProps) {
  const may = useMay();
  if (instrument.retiredAt !== null) return null;
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
