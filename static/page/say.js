// One calm voice for those who hear the page: what changed, said once, after what is being said.

import { make } from "./format.js";

const mostKept = 5; // a voice that is behind still gets these

const voice = document.getElementById("say");

export function say(text) {
  voice.append(make("p", "", text));
  while (voice.children.length > mostKept) {
    voice.firstElementChild.remove();
  }
}
