/** New check: begun with its instrument and condition, then one page from the first file to the signature. */
import { beginCheckInput, type ConfigurationState, type FleetRow } from "@wavekeep/api/contract";
import { useState } from "react";
import { useNavigate, useParams, useSearchParams } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { Refused } from "../shared/form.tsx";
import { NotForYou } from "../shared/not-for-you.tsx";
import { calledWords } from "../shared/words.ts";
import { Button, Empty, formatDate, LinkButton, Page, Section, SelectField, useMay } from "../ui/index.ts";
import { DraftPage } from "./draft-page.tsx";
import { useBeginCheck, useCheck, useFleet } from "./queries.ts";

export function NewCheckPage() {
  const { checkId } = useParams();
  const may = useMay();
  if (!may("check.begin")) return <NotForYou title="New check" who="a technician or a lab manager" />;
  return checkId === undefined ? <BeginPage /> : <LoadDraft key={checkId} checkId={checkId} />;
}

function LoadDraft({ checkId }: { checkId: string }) {
  const check = useCheck(checkId);
  if (check.data === undefined) {
    return (
      <Page title={<span className="text-quiet">New check</span>} name="New check">
        <Section title="Source and conditions">
          <Asked query={check} rows={6}>
            {() => null}
          </Asked>
        </Section>
      </Page>
    );
  }
  const { summary, may } = check.data;
  if (!may.edit) {
    return (
      <Page
        title={`${summary.number} can't be changed any more.`}
        lead="It was submitted, or its draft belongs to somebody else. Nothing was lost; read it as it stands."
        actions={
          <LinkButton to={`/checks/${summary.id}`} filled>
            Open {summary.number}
          </LinkButton>
        }
      />
    );
  }
  return <DraftPage check={check.data} />;
}

/** `near infrared, as-left check asked for`. */
function configurationLabel(item: ConfigurationState): string {
  const due = item.asLeftAsked
    ? "as-left check asked for"
    : item.dueOn === null || item.dueDays === null
      ? null
      : `due ${formatDate(item.dueOn)}`;
  return [item.name, due].filter((part) => part !== null).join(", ");
}

/** A check has its number from the moment it is begun, so that gaps stay visible: it begins by a press, never by an address. */
function BeginPage() {
  const [search, setSearch] = useSearchParams();
  const navigate = useNavigate();
  const fleet = useFleet();
  const begin = useBeginCheck((check) => void navigate(`/checks/${check.summary.id}/edit`, { replace: true }));
  const rows = (fleet.data?.items ?? []).filter((row) => row.retiredAt === null);
  const asked = search.get("configuration");
  const row = rows.find(
    (one) => one.configurations.some((item) => item.id === asked) || one.id === search.get("instrument"),
  );
  const chosen = row?.configurations.find((item) => item.id === asked);
  const called =
    row === undefined ? null : calledWords({ instrumentName: row.name, configurationName: chosen?.name ?? null });
  const follows = search.get("follows");
  const [condition, setCondition] = useState<"as-found" | "as-left" | null>(null);
  const shown = condition ?? (chosen?.asLeftAsked === true || follows !== null ? "as-left" : "as-found");
  const chooseInstrument = (next: FleetRow | undefined) => {
    const only = next?.configurations.length === 1 ? next.configurations[0] : undefined;
    const query: Record<string, string> =
      next === undefined ? {} : only === undefined ? { instrument: next.id } : { configuration: only.id };
    setSearch(query, { replace: true });
  };
  const start = () => {
    if (asked === null || begin.isPending) return;
    const body = beginCheckInput.safeParse({
      configurationId: asked,
      condition: shown,
      followsCheckId: shown === "as-left" ? (follows ?? chosen?.lastCheckId ?? null) : null,
    });
    if (body.success) begin.mutate(body.data);
  };
  return (
    <Page
      title={called === null ? "New check" : `New check of ${called}`}
      aside="Checks"
      lead="It gets its number when it is begun, and stays listed from then on."
    >
      <Section title="Begin" note="As found before as left: what the instrument was is recorded before it is adjusted.">
        <Asked query={fleet} rows={3}>
          {() =>
            rows.length === 0 ? (
              <Empty text="There is no instrument to check yet. A lab manager registers the first one." />
            ) : (
              <form
                className="grid max-w-[720px] gap-4"
                onSubmit={(event) => {
                  event.preventDefault();
                  start();
                }}
              >
                <SelectField
                  label="Instrument"
                  placeholder="Choose an instrument"
                  value={row?.id ?? ""}
                  onChange={(event) => chooseInstrument(rows.find((one) => one.id === event.target.value))}
                  choices={rows.map((one) => ({
                    value: one.id,
                    label: one.place === "" ? one.name : `${one.name}, ${one.place}`,
                  }))}
                />
                {row !== undefined && row.configurations.length > 1 && (
                  <SelectField
                    label="Configuration"
                    placeholder="Choose which"
                    value={chosen?.id ?? ""}
                    onChange={(event) =>
                      setSearch(
                        event.target.value === "" ? { instrument: row.id } : { configuration: event.target.value },
                        { replace: true },
                      )
                    }
                    choices={row.configurations.map((item) => ({ value: item.id, label: configurationLabel(item) }))}
                    note="Each has its own axis, tolerance and drift: choose the one the captures come from."
                  />
                )}
                <SelectField
                  label="Condition"
                  value={shown}
                  onChange={(event) => setCondition(event.target.value === "as-left" ? "as-left" : "as-found")}
                  choices={[
                    { value: "as-found", label: "as found: nothing was changed since it was last used" },
                    { value: "as-left", label: "as left: after an adjustment or a service" },
                  ]}
                  note={
                    shown === "as-left" && chosen !== undefined && chosen.lastCheckNumber !== null
                      ? `Follows ${chosen.lastCheckNumber}.`
                      : undefined
                  }
                />
                <Refused error={begin.error} />
                <div className="flex flex-wrap gap-3">
                  <Button filled type="submit" busy={begin.isPending} disabled={asked === null}>
                    Begin the check
                  </Button>
                  <LinkButton to="/checks">Cancel</LinkButton>
                </div>
              </form>
            )
          }
        </Asked>
      </Section>
    </Page>
  );
}
