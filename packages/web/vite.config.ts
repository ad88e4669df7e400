import tailwindcss from "@tailwindcss/vite";
import react from "@vitejs/plugin-react";
import { defineConfig } from "vite";

export default defineConfig({
  plugins: [react(), tailwindcss()],
  build: {
    // scripts/build.mjs names a folder per state of the sources.
    outDir: process.env["WAVEKEEP_WEB_OUT"] ?? "dist/dev",
    emptyOutDir: true,
    sourcemap: false,
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
