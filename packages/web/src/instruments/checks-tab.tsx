/** Every check of one instrument, or of one of its configurations, newest first. */
import type { Configuration, Instrument } from "@wavekeep/api/contract";
import { Asked, Older } from "../shared/asked.tsx";
import { ChecksTable } from "../shared/checks-table.tsx";
import { Empty, LinkButton, Section, useMay } from "../ui/index.ts";
import { useInstrumentChecks } from "./queries.ts";

/** Histories stand end to end while there is one configuration at a time; of several, or of one that ended, each has its own. */
function checksOf(instrument: Instrument, configuration: Configuration) {
  const present = instrument.configurations.filter((item) => item.toOn === null);
  const isWhole = instrument.retiredAt !== null || (present.length === 1 && configuration.toOn === null);
  return isWhole ? { instrumentId: instrument.id } : { configurationId: configuration.id };
}

export function ChecksTab({ instrument, configuration }: { instrument: Instrument; configuration: Configuration }) {
  const of = checksOf(instrument, configuration);
  const checks = useInstrumentChecks(of);
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
                configuration.toOn === null &&
                may("check.begin") && (
                  <LinkButton to={`/checks/new?configuration=${configuration.id}`}>Start a check</LinkButton>
                )
              }
            />
          ) : (
            <>
              <ChecksTable
                checks={rows}
                caption={`Checks of ${instrument.name}`}
                ofInstrument
                withConfiguration={"instrumentId" in of && instrument.configurations.length > 1}
              />
              <Older query={checks} />
            </>
          )
        }
      </Asked>
    </Section>
  );
}
