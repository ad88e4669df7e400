/** The design's primitives, as pages take them. */
export { Button, FileLink, LinkButton, TextButton, TextLink } from "./button.tsx";
export { Dialog, PasswordDialog } from "./dialog.tsx";
export {
  CheckField,
  DateField,
  Field,
  NumberField,
  PasswordField,
  SelectField,
  TextArea,
  type Choice,
} from "./field.tsx";
export * from "./format.ts";
export { Menu, type MenuGroup, type MenuItem } from "./menu.tsx";
export { Fact, FactList, Facts, Page, Section } from "./page.tsx";
export { Caution, Due, Empty, Skeleton, Switches, Tabs, TimeAgo, When } from "./parts.tsx";
export { ProblemNote } from "./problem-note.tsx";
export { Decimal, Quantity } from "./quantity.tsx";
export {
  resultState,
  Status,
  StatusShape,
  statusColour,
  statusWord,
  verdictState,
  type StatusState,
} from "./status.tsx";
export { Table, type Column } from "./table.tsx";
export { useTitle } from "./use-title.ts";
export {
  api,
  routeUrl,
  type OnProgress,
  type RouteBody,
  type RouteParams,
  type RouteQuery,
  type RouteReply,
} from "../shared/api.ts";
export { ApiProblem, problemOf } from "../shared/problem.ts";
export { mayDo, useMay, useMe, useToday, useZone, type Member } from "../shared/session.ts";
