// Plots that stand still, said so that nobody can take them for the run as it is.

import { make, put } from "./format.js";
import { say } from "./say.js";

export class Still {
  // go has the plots follow the run again.
  constructor(go) {
    this.element = make("div", "halt");
    this.element.hidden = true;
    this.words = make("b");
    this.now = make("span");
    const button = make("button", "strong", "Let the plots run");
    button.type = "button";
    button.onclick = go;
    this.element.append(this.words, this.now, button);
    this.refused = "";
  }

  // begin says of which message the plots stand still, end that they go on.
  begin({ status }) {
    this.since = performance.now();
    const time = new Date().toLocaleTimeString([], { hour12: false });
    put(this.words, `‖ PLOTS STAND STILL since ${time}, after ${status.averaged} averages.`);
    this.element.hidden = false;
    say("The plots stand still. The run goes on.");
    this.follow({ status });
  }

  end() {
    this.element.hidden = true;
    this.refused = "";
    say("The plots follow the run again.");
  }

  // follow says how far the run has come meanwhile.
  follow({ status }) {
    put(this.now, `The run goes on: ${status.averaged} averages now. ${this.refused}`);
  }

  // refuse says why something was not done.
  refuse(what, message) {
    this.refused = `To show ${what}, let the plots run.`;
    say(this.refused);
    this.follow(message);
  }
}
