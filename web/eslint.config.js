// Rules for the page's sources. What the page must never do (network, HTML as text, arithmetic on numbers that a person
// typed) is held by tests/test_house.py, which also runs where no Node is.
import js from "@eslint/js";
import globals from "globals";

const rules = {
  ...js.configs.recommended.rules,
  curly: ["error", "multi-line"],
  eqeqeq: "error",
  "no-shadow": "error",
  "no-var": "error",
  "object-shorthand": "error",
  "prefer-const": "error",
  "prefer-template": "error",
  "max-lines": ["error", 300],
  "max-depth": ["error", 4],
  complexity: ["error", 15],
};

export default [
  { ignores: ["node_modules/**", "app/generated/**"] },
  { files: ["app/**/*.js"], languageOptions: { globals: globals.browser }, rules },
  { files: ["served/**/*.js"], languageOptions: { globals: { ...globals.serviceworker, BUILD: "readonly" } }, rules },
  { files: ["worker/**/*.js"], languageOptions: { globals: { ...globals.worker, PYODIDE_LOCK_INFO: "readonly" } }, rules },
  { files: ["build/**/*.mjs", "*.config.js"], languageOptions: { globals: globals.node }, rules },
];
