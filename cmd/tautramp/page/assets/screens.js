// The screens beside the ramp, by name.
import { home } from "./home.js";
import { millForms } from "./forms.js";
import { before, boards } from "./before.js";
import { result } from "./result.js";

export const screens = { home, mill: millForms, before, boards, result };
