/** Beginning a check: a plain instrument is one choice; of several configurations, one is chosen by hand. */
import type { ConfigurationState, FleetRow } from "@wavekeep/api/contract";
import { cleanup, render, screen } from "@testing-library/react";
import userEvent from "@testing-library/user-event";
import { createMemoryRouter, RouterProvider } from "react-router";
import { afterEach, beforeEach, expect, test, vi } from "vitest";
import { NewCheckPage } from "./new-check-page.tsx";

const ids = {
  plain: "0190a000-0000-7000-8000-000000000001",
  visible: "0190a000-0000-7000-8000-000000000002",
  red: "0190a000-0000-7000-8000-000000000003",
  lastOfRed: "0190a000-0000-7000-8000-000000000004",
};
const configuration = (given: Partial<ConfigurationState>) =>
  ({
    name: null,
    dueOn: "2027-01-14",
    dueDays: 6,
    asLeftAsked: false,
    lastCheckId: null,
    ...given,
  }) as ConfigurationState;
const instrument = (id: string, name: string, configurations: ConfigurationState[]) =>
  ({ id, name, place: "Bench 2", retiredAt: null, configurations }) as unknown as FleetRow;

const { begin } = vi.hoisted(() => ({ begin: vi.fn() }));
vi.mock("./queries.ts", () => ({
  useFleet: () => ({
    data: {
      items: [
        instrument("dunlin", "Dunlin", [configuration({ id: ids.plain })]),
        instrument("curlew", "Curlew", [
          configuration({ id: ids.red, name: "red", asLeftAsked: true, lastCheckId: ids.lastOfRed }),
          configuration({ id: ids.visible, name: "visible" }),
        ]),
      ],
    },
    error: null,
  }),
  useBeginCheck: () => ({ mutate: begin, isPending: false, error: null }),
}));
vi.mock("./draft-page.tsx", () => ({ DraftPage: () => null }));
vi.mock("../ui/index.ts", async (original) => ({ ...(await original<object>()), useMay: () => () => true }));

const open = (address: string) => {
  const router = createMemoryRouter([{ path: "/checks/new", element: <NewCheckPage /> }], {
    initialEntries: [address],
  });
  render(<RouterProvider router={router} />);
  return router;
};
const press = () => userEvent.click(screen.getByRole("button", { name: "Begin the check" }));

beforeEach(() => begin.mockReset());
afterEach(cleanup);

test("a plain instrument is begun on at once, and the word never shows", async () => {
  const router = open("/checks/new");
  await userEvent.selectOptions(screen.getByLabelText("Instrument"), "Dunlin, Bench 2");
  expect(document.body.textContent).not.toMatch(/configuration/i);
  expect(router.state.location.search).toBe(`?configuration=${ids.plain}`);
  await press();
  expect(begin).toHaveBeenCalledWith({ configurationId: ids.plain, condition: "as-found", followsCheckId: null });
});

test("of several, none is taken until one is chosen; the choice stands in the address and brings its own condition", async () => {
  const router = open("/checks/new");
  await userEvent.selectOptions(screen.getByLabelText("Instrument"), "Curlew, Bench 2");
  expect(router.state.location.search).toBe("?instrument=curlew");
  await press();
  expect(begin).not.toHaveBeenCalled();
  await userEvent.selectOptions(screen.getByLabelText("Configuration"), "visible, due 14 Jan 2027");
  expect(router.state.location.search).toBe(`?configuration=${ids.visible}`);
  await press();
  expect(begin).toHaveBeenLastCalledWith({ configurationId: ids.visible, condition: "as-found", followsCheckId: null });
  await userEvent.selectOptions(screen.getByLabelText("Configuration"), "red, as-left check asked for");
  expect(screen.getByRole("heading", { level: 1 }).textContent).toBe("New check of Curlew (red)");
  await press();
  expect(begin).toHaveBeenLastCalledWith({
    configurationId: ids.red,
    condition: "as-left",
    followsCheckId: ids.lastOfRed,
  });
});
