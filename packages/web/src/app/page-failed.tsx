/** What stands in the place of a page that failed, or that is not there. */
import { isRouteErrorResponse, useRouteError } from "react-router";
import { Button, LinkButton } from "../ui/button.tsx";
import { Page } from "../ui/page.tsx";
import { ProblemNote } from "../ui/problem-note.tsx";

/** A page's code could not be fetched, most often because the server was updated meanwhile. */
const isStaleCode = (error: unknown) =>
  error instanceof TypeError && /module script|dynamically imported|Importing/i.test(error.message);

export function PageFailed() {
  const error = useRouteError();
  if (isRouteErrorResponse(error) && error.status === 404) return <NotFound />;
  return (
    <Page
      title="This page could not be drawn."
      lead={
        isStaleCode(error)
          ? "Wavekeep was updated since this page was opened. Reload it; nothing stored is lost."
          : "Nothing stored is lost. Reload the page; if it fails again, tell whoever looks after this server."
      }
      actions={
        <Button filled onClick={() => window.location.reload()}>
          Reload
        </Button>
      }
    >
      {!isStaleCode(error) && <ProblemNote error={error} className="mt-8" />}
    </Page>
  );
}

export function NotFound() {
  return (
    <Page
      title="There is nothing here."
      name="Not found"
      lead="The address may be mistyped, or it belongs to another lab."
      actions={<LinkButton to="/today">Today</LinkButton>}
    />
  );
}
