/** One source: what it is, its certificate, its cautions; registered, changed and retired here. */
import type { Source } from "@wavekeep/api/contract";
import { retireSourceInput } from "@wavekeep/api/contract";
import { useRef } from "react";
import { useForm } from "react-hook-form";
import { useParams, useSearchParams } from "react-router";
import type { z } from "zod";
import { Asked } from "../shared/asked.tsx";
import { DialogForm } from "../shared/dialog-form.tsx";
import { FormArea, rulesOf, useFormVersion } from "../shared/form.tsx";
import { NotForYou } from "../shared/not-for-you.tsx";
import { counted, sentenceCase, sourceKindWords } from "../shared/words.ts";
import {
  Button,
  Caution,
  Due,
  Empty,
  FactList,
  FileLink,
  formatBytes,
  formatDate,
  formatHash,
  NARROW_SPACE,
  Page,
  ProblemNote,
  routeUrl,
  Section,
  TextLink,
  useMay,
  When,
} from "../ui/index.ts";
import { useRetireSource, useSource, useStoreCertificate } from "./queries.ts";
import { EditSourceForm, NewSourceForm } from "./source-form.tsx";

export function SourcePage() {
  const { sourceId = "" } = useParams();
  const may = useMay();
  if (sourceId === "new")
    return may("source.change") ? <NewSourceForm /> : <NotForYou title="Register a source" who="a lab manager" />;
  return <ReadSource key={sourceId} sourceId={sourceId} />;
}

function ReadSource({ sourceId }: { sourceId: string }) {
  const source = useSource(sourceId);
  const [search, setSearch] = useSearchParams();
  const may = useMay();
  if (source.data === undefined) {
    return (
      <Page title={<span className="text-quiet">Source</span>} name="Source" aside="Sources">
        <Section title="Source">
          <Asked query={source} rows={6}>
            {() => null}
          </Asked>
        </Section>
      </Page>
    );
  }
  const close = () => setSearch({});
  const changes = may("source.change") && source.data.retiredAt === null;
  if (search.get("do") === "edit" && changes)
    return <EditSourceForm source={source.data} refetch={() => void source.refetch()} onClose={close} />;
  return (
    <>
      <LoadedSource source={source.data} changes={changes} show={(what) => setSearch({ do: what })} />
      {search.get("do") === "retire" && changes && <RetireDialog source={source.data} onClose={close} />}
    </>
  );
}

function LoadedSource({ source, changes, show }: { source: Source; changes: boolean; show: (what: string) => void }) {
  const past = source.reviewDueDays !== null && source.reviewDueDays < 0 && source.retiredAt === null;
  return (
    <Page
      title={source.label}
      aside={
        <>
          <span className="book:block">{sentenceCase(sourceKindWords[source.kind])}</span>
        </>
      }
      lead={
        <>
          {source.name}
          {source.retiredAt !== null && (
            <>
              , retired <When at={source.retiredAt} as="day" />
            </>
          )}
          .{past && " Its review is past: what happens then is the lab’s policy, and checks made with it say so."}
        </>
      }
      actions={
        changes && (
          <>
            <Button onClick={() => show("retire")}>Retire</Button>
            <Button onClick={() => show("edit")}>Edit</Button>
          </>
        )
      }
    >
      <Section title="What it is">
        <div className="max-w-[520px]">
          <FactList
            items={[
              ...(source.elements.length > 0
                ? [
                    {
                      label: "Lines of",
                      value: (
                        <TextLink to={`/sources/lines?element=${source.elements[0]}`}>
                          {source.elements.join(", ")}
                        </TextLink>
                      ),
                    },
                  ]
                : []),
              ...(source.laserLineNm === null
                ? []
                : [{ label: "Laser line", value: `${source.laserLineNm}${NARROW_SPACE}nm` }]),
              { label: "Maker", value: source.maker || "not recorded" },
              { label: "Serial number", value: source.serial || "not recorded" },
              ...(source.builtIntoInstrumentName === null
                ? []
                : [
                    {
                      label: "Built into",
                      value: (
                        <TextLink to={`/instruments/${source.builtIntoInstrumentId}`}>
                          {source.builtIntoInstrumentName}
                        </TextLink>
                      ),
                    },
                  ]),
              { label: "Warm-up", value: `${source.warmUpMinutes}${NARROW_SPACE}min` },
              {
                label: "Review due",
                value:
                  source.reviewDueOn === null ? (
                    "no date"
                  ) : (
                    <>
                      {formatDate(source.reviewDueOn)}
                      {source.reviewDueDays !== null && source.reviewDueDays < 30 && source.retiredAt === null && (
                        <>
                          , <Due on={source.reviewDueOn} days={source.reviewDueDays} nearDays={30} />
                        </>
                      )}
                    </>
                  ),
              },
              { label: "Used in", value: counted(source.usedInChecks, "check") },
            ]}
          />
        </div>
        {source.note !== "" && <p className="mt-3 max-w-[720px]">{source.note}</p>}
      </Section>
      <Section title="Cautions" note="They stand wherever it is chosen.">
        {source.cautions.length === 0 ? (
          <p className="text-quiet">None is known for this kind.</p>
        ) : (
          <div className="grid gap-3">
            {source.cautions.map((caution) => (
              <Caution key={caution.title} title={caution.title} text={caution.text} />
            ))}
          </div>
        )}
      </Section>
      <Section title="Certificate" note="Stored byte for byte, with its SHA-256.">
        <Certificate source={source} changes={changes} />
      </Section>
    </Page>
  );
}

function Certificate({ source, changes }: { source: Source; changes: boolean }) {
  const store = useStoreCertificate(source.id);
  const input = useRef<HTMLInputElement>(null);
  const upload = changes && (
    <>
      <input
        ref={input}
        type="file"
        className="sr-only"
        tabIndex={-1}
        aria-label="Certificate to store"
        onChange={(event) => {
          const file = event.target.files?.[0];
          if (file !== undefined) store.mutate(file);
          event.target.value = "";
        }}
      />
      <Button busy={store.isPending} onClick={() => input.current?.click()}>
        {source.certificate === null ? "Store the certificate" : "Store a newer certificate"}
      </Button>
    </>
  );
  return (
    <>
      {source.certificate === null ? (
        <Empty text="No certificate is stored yet. A PDF or scan up to 20 MB is taken as it is." action={upload} />
      ) : (
        <>
          <p>
            <FileLink
              href={routeUrl("readCertificate", { sourceId: source.id })}
              download={source.certificate.fileName}
            >
              {source.certificate.fileName}
            </FileLink>
            <span className="type-note">
              {" "}
              {formatBytes(source.certificate.sizeBytes)}, stored <When at={source.certificate.storedAt} /> by{" "}
              {source.certificate.storedBy.name}, SHA-256{" "}
              <span title={source.certificate.sha256}>{formatHash(source.certificate.sha256)}</span>
            </span>
          </p>
          <div className="mt-4">{upload}</div>
        </>
      )}
      {store.error !== null && <ProblemNote error={store.error} className="mt-4" />}
    </>
  );
}

function RetireDialog({ source, onClose }: { source: Source; onClose: () => void }) {
  const { version, takeCurrent } = useFormVersion(source.version);
  const retire = useRetireSource(source.id, onClose);
  const shape = retireSourceInput.omit({ version: true });
  const form = useForm<z.input<typeof shape>, unknown, z.output<typeof shape>>({
    resolver: rulesOf(shape),
    defaultValues: { reason: "" },
  });
  return (
    <DialogForm
      title={`Retire ${source.label}`}
      lead="It can't be chosen for a check any more; the checks made with it keep it."
      confirmLabel="Retire the source"
      form={form}
      onClose={onClose}
      busy={retire.isPending}
      error={retire.error}
      onKeepMine={() => {
        takeCurrent();
        retire.reset();
      }}
      onSubmit={(values) => retire.mutate({ ...values, version })}
    >
      <FormArea name="reason" label="Reason" />
    </DialogForm>
  );
}
