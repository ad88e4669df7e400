/** New check: begun with its instrument and condition, then one page from the first file to the signature. */
import { beginCheckInput } from "@wavekeep/api/contract";
import { useState } from "react";
import { useNavigate, useParams, useSearchParams } from "react-router";
import { Asked } from "../shared/asked.tsx";
import { Refused } from "../shared/form.tsx";
import { NotForYou } from "../shared/not-for-you.tsx";
import { Button, Empty, LinkButton, Page, Section, SelectField, useMay } from "../ui/index.ts";
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

/** A check has its number from the moment it is begun, so that gaps stay visible: it begins by a press, never by an address. */
function BeginPage() {
  const [search, setSearch] = useSearchParams();
  const navigate = useNavigate();
  const fleet = useFleet();
  const begin = useBeginCheck((check) => void navigate(`/checks/${check.summary.id}/edit`, { replace: true }));
  const rows = (fleet.data?.items ?? []).filter((row) => row.retiredAt === null);
  const chosen = rows.find((row) => row.configurationId === search.get("configuration"));
  const follows = search.get("follows");
  const [condition, setCondition] = useState<"as-found" | "as-left" | null>(null);
  const shown = condition ?? (chosen?.asLeftAsked === true || follows !== null ? "as-left" : "as-found");
  const start = () => {
    const configurationId = chosen?.configurationId ?? search.get("configuration");
    if (configurationId === null || begin.isPending) return;
    const body = beginCheckInput.safeParse({
      configurationId,
      condition: shown,
      followsCheckId: shown === "as-left" ? (follows ?? chosen?.lastCheckId ?? null) : null,
    });
    if (body.success) begin.mutate(body.data);
  };
  return (
    <Page
      title={chosen === undefined ? "New check" : `New check of ${chosen.name}`}
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
                  value={search.get("configuration") ?? ""}
                  onChange={(event) =>
                    setSearch(event.target.value === "" ? {} : { configuration: event.target.value }, { replace: true })
                  }
                  choices={[
                    ...rows.map((row) => ({ value: row.configurationId, label: `${row.name}, ${row.place}` })),
                    ...(chosen === undefined && search.get("configuration") !== null
                      ? [{ value: search.get("configuration") ?? "", label: "the configuration you came from" }]
                      : []),
                  ]}
                />
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
                  <Button filled type="submit" busy={begin.isPending} disabled={search.get("configuration") === null}>
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
