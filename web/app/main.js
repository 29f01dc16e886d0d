import "./boot.js";
import { startEngine } from "./engine.js";
import { startPage } from "./page.js";
import { mendStyles } from "./styles.js";
import { useWords } from "./words.js";
import words from "./generated/words.js";

mendStyles();
useWords(words);
startPage(startEngine);
