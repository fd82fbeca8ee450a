// The screens beside the ramp, by name.
import { home } from "./home.js";
import { millForms } from "./forms.js";
import { before, boards } from "./before.js";
import { result, card } from "./result.js";
import { bench } from "./bench.js";

export const screens = { home, mill: millForms, before, boards, result, card, bench };
