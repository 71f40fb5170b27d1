/** Lets a component test import an icon as text, as the build's `.svg` loader does. */
module.exports = {
  process: (text) => ({ code: `module.exports = ${JSON.stringify(text)};` }),
};
