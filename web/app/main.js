import "./boot.js";
import { startEngine } from "./engine.js";
import { startPage } from "./page.js";
import { languageOf, speak } from "./language.js";
import { loadSettings } from "./settings.js";

const settings = loadSettings();
const language = languageOf(settings);
speak(language);
startPage((options) => startEngine({ ...options, language }), settings);
