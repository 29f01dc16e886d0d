import "./boot.js";
import { startEngine } from "./engine.js";
import { startPage } from "./page.js";
import { useWords } from "./words.js";
import words from "./generated/words.js";

useWords(words);
startPage(startEngine);
