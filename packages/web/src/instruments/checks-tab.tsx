/** Every check of one instrument, newest first. */
import type { Instrument } from "@wavekeep/api/contract";
import { Asked, Older } from "../shared/asked.tsx";
import { ChecksTable } from "../shared/checks-table.tsx";
import { Empty, LinkButton, Section, useMay } from "../ui/index.ts";
import { useInstrumentChecks } from "./queries.ts";

export function ChecksTab({ instrument }: { instrument: Instrument }) {
  const checks = useInstrumentChecks(instrument.id);
  const may = useMay();
  const rows = checks.data?.pages.flatMap((page) => page.items) ?? [];
  return (
    <Section plain title="Checks" note="Newest first; abandoned attempts stay in their check.">
      <Asked query={checks} rows={8}>
        {() =>
          rows.length === 0 ? (
            <Empty
              text="No check yet. The first one says where the axis stands."
              action={
                instrument.retiredAt === null &&
                may("check.begin") && (
                  <LinkButton to={`/checks/new?configuration=${instrument.currentConfigurationId}`}>
                    Start a check
                  </LinkButton>
                )
              }
            />
          ) : (
            <>
              <ChecksTable checks={rows} caption={`Checks of ${instrument.name}`} ofInstrument />
              <Older query={checks} />
            </>
          )
        }
      </Asked>
    </Section>
  );
}
