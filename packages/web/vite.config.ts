import tailwindcss from "@tailwindcss/vite";
import react from "@vitejs/plugin-react";
import { defineConfig } from "vite";
import { robotoFlex } from "./build/roboto-flex.mjs";

export default defineConfig({
  plugins: [react(), tailwindcss(), ...(process.env["VITEST"] ? [] : [robotoFlex()])],
  build: {
    // scripts/build.mjs names a folder per state of the sources.
    outDir: process.env["WAVEKEEP_WEB_OUT"] ?? "dist/dev",
    emptyOutDir: true,
    sourcemap: false,
    target: "es2022",
    // Fonts stay files of their own: fetched before the first drawing, cached apart from the style sheet.
    assetsInlineLimit: 0,
    // React, router, queries and the contract together; every page and drawing is a piece of its own.
    chunkSizeWarningLimit: 600,
  },
  worker: { format: "es" },
  server: {
    host: "127.0.0.1",
    port: 5173,
    strictPort: true,
    proxy: {
      "/api": { target: process.env["WAVEKEEP_API"] ?? "http://127.0.0.1:4310", changeOrigin: false },
      "/dev/mail": { target: process.env["WAVEKEEP_API"] ?? "http://127.0.0.1:4310", changeOrigin: false },
    },
  },
});
