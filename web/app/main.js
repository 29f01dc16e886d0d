import "./boot.js";
import { startEngine } from "./engine.js";
import { languageOf, speak } from "./language.js";
import { startPage } from "./page.js";
import { loadSettings } from "./settings.js";
import { mendStyles } from "./styles.js";

mendStyles();
const settings = loadSettings();
const language = languageOf(settings);
speak(language);
startPage((options) => startEngine({ ...options, language }), settings);
