import { StrictMode } from "react";
import { createRoot } from "react-dom/client";
import { App } from "./app/app.tsx";
import { recallTheme } from "./shared/theme.ts";

recallTheme();
const root = document.getElementById("root");
if (root === null) throw new Error("The page has no place for the application.");
createRoot(root).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
