import { defineConfig } from "vite";

// Fixed file names, so that a page can link them with the version in the query; nothing is inlined, so that the content
// security policy needs no exception.
export default defineConfig({
  root: import.meta.dirname,
  base: "./",
  publicDir: false,
  build: {
    outDir: "../wwwroot/built",
    emptyOutDir: true,
    target: "es2022",
    assetsInlineLimit: 0,
    cssCodeSplit: false,
    modulePreload: false,
    rollupOptions: {
      input: "main.ts",
      output: {
        entryFileNames: "qc.js",
        assetFileNames: (asset) => (asset.names.some((n) => n.endsWith(".css")) ? "qc.css" : "fonts/[name][extname]"),
      },
    },
  },
});
