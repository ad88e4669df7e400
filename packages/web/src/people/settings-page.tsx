/** Settings: people and shared PCs, the lab, one's own account. */
import { Navigate, useParams } from "react-router";
import { useMay, useMe } from "../shared/session.ts";
import { Page } from "../ui/page.tsx";
import { Tabs } from "../ui/parts.tsx";
import { LabTab } from "./lab-tab.tsx";
import { MeTab } from "./me-tab.tsx";
import { PeopleTab } from "./people-tab.tsx";

export function SettingsPage() {
  const me = useMe();
  const may = useMay();
  const { tab } = useParams();
  const managesPeople = may("people.change");
  const tabs = [
    { to: "/settings/people", label: "People" },
    { to: "/settings/lab", label: "Lab" },
    { to: "/settings/me", label: "My account" },
  ];
  if (tab === undefined) return <Navigate to={managesPeople ? "/settings/people" : "/settings/me"} replace />;
  return (
    <Page
      title={tab === "me" ? me.person.name : tab === "lab" ? me.lab.name : "People of the lab"}
      name={tab === "me" ? "My account" : tab === "lab" ? "Lab" : "People"}
      aside={
        <>
          Settings
          <br />
          {me.lab.name}
        </>
      }
    >
      <div className="book mt-6">
        <div className="book-margin" />
        <div className="book-body">
          <Tabs label="Settings" items={tabs} />
        </div>
      </div>
      {tab === "people" && <PeopleTab />}
      {tab === "lab" && <LabTab />}
      {tab === "me" && <MeTab />}
      {!["people", "lab", "me"].includes(tab) && <Navigate to="/settings/me" replace />}
    </Page>
  );
}
