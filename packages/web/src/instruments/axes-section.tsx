/** The axes a configuration has had: which was in force when, where it came from, and why it took over. */
import type { AxisEntry, Configuration } from "@wavekeep/api/contract";
import { Asked } from "../shared/asked.tsx";
import { MINUS, Section, Table, TextLink, When } from "../ui/index.ts";
import { degreeWords, meaningWords } from "./overview-tab.tsx";
import { useAxes } from "./queries.ts";

const coefficientsText = (axis: AxisEntry) =>
  axis.coefficients.map((value) => String(value).replaceAll("-", MINUS)).join(",  ");

const Until = ({ axis }: { axis: AxisEntry }) =>
  axis.inForceTo === null ? <b>in force</b> : <When at={axis.inForceTo} as="day" />;

const From = ({ axis }: { axis: AxisEntry }) =>
  axis.fromCheck === null ? (
    <>typed in</>
  ) : (
    <TextLink to={`/checks/${axis.fromCheck.id}`}>{axis.fromCheck.number}</TextLink>
  );

export function AxesSection({ configuration }: { configuration: Configuration }) {
  const hasAxes = configuration.axisKind !== "wavelength";
  const axes = useAxes(configuration.id, hasAxes);
  if (!hasAxes) return null;
  return (
    <Section
      title="Axes"
      note="Newest first. A check is judged by the one in force when its first capture arrived; none is ever changed."
    >
      <Asked query={axes} rows={2}>
        {({ items }) =>
          items.length === 0 ? (
            <p className="text-quiet">
              None yet. The first check names its lines from the range; once it is approved, its axis is in force.
            </p>
          ) : (
            <Table
              caption="Axes, newest first"
              rows={items}
              rowKey={(axis) => axis.id}
              columns={[
                {
                  key: "number",
                  head: "Axis",
                  className: "whitespace-nowrap",
                  cell: (axis) => <b>no. {axis.number}</b>,
                },
                {
                  key: "from",
                  head: "From",
                  className: "whitespace-nowrap",
                  cell: (axis) => <When at={axis.inForceFrom} as="day" />,
                },
                { key: "to", head: "To", className: "whitespace-nowrap", cell: (axis) => <Until axis={axis} /> },
                {
                  key: "degree",
                  head: "Polynomial",
                  cell: (axis) => `${degreeWords[axis.degree] ?? ""}, ${meaningWords[axis.meaning]}`,
                },
                {
                  key: "check",
                  head: "Fitted by",
                  className: "whitespace-nowrap",
                  cell: (axis) => <From axis={axis} />,
                },
                { key: "by", head: "Put in force by", cell: (axis) => axis.by.name },
              ]}
              rowNote={(axis) => <AxisNote axis={axis} />}
              narrow={(axis) => (
                <div className="py-1">
                  <p className="flex items-baseline justify-between gap-3">
                    <span>
                      <b>no. {axis.number}</b>{" "}
                      <span className="type-note">
                        from <When at={axis.inForceFrom} as="day" />
                      </span>
                    </span>
                    <span>
                      <Until axis={axis} />
                    </span>
                  </p>
                  <p className="type-note">
                    {degreeWords[axis.degree] ?? ""}, {meaningWords[axis.meaning]}, <From axis={axis} />, {axis.by.name}
                  </p>
                  <AxisNote axis={axis} />
                </div>
              )}
            />
          )
        }
      </Asked>
    </Section>
  );
}

function AxisNote({ axis }: { axis: AxisEntry }) {
  return (
    <span className="type-note block break-words">
      {axis.reason}
      <span className="block">λ(p)/nm: {coefficientsText(axis)}</span>
    </span>
  );
}
