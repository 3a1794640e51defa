// window.shearprint.call: the calls for other people's scripts.

// installCalls offers the calls; each answers a promise of the JSON of the command of that name, or, with {text: true}, of
// its exact text.
export function installCalls({ engine, timings, follow }) {
  const own = {
    timings: async () => timings(),

    // view reads the view, or changes it: {link: "#..."} to that of a link, other names one by one.
    async view(args) {
      if (Object.keys(args).length === 0) return flat(await engine.ask("view"));
      const answer = args.link === undefined
        ? await engine.ask("view", args)
        : await engine.ask("link", { name: "view", run: "", link: String(args.link).replace(/^#/, "") });
      await follow(answer.view);
      return flat(answer);
    },

    // picture answers the address of a PNG of the view, as wide and high as the page unless told.
    async picture(args) {
      const size = { width: args.width ?? innerWidth, height: args.height ?? innerHeight };
      const { block } = await engine.ask("picture", size);
      return new Promise((resolve, reject) => {
        const reader = new FileReader();
        reader.onload = () => resolve(reader.result);
        reader.onerror = () => reject(reader.error);
        reader.readAsDataURL(new Blob([block], { type: "image/png" }));
      });
    },
  };
  window.shearprint = {
    // settled promises that the finished picture of the present view is on the screen.
    async settled() { await engine.ask("settled"); },
    async call(name, args = {}) {
      const { text, ...rest } = args;
      if (Object.hasOwn(own, name)) return own[name](rest);
      const answer = await engine.ask("call", { name, args: rest });
      return text ? answer.text : JSON.parse(answer.text);
    },
  };
}

const flat = ({ view, link }) => ({ ...view, link: `#${link}` });
