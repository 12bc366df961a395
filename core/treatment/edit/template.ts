/** A settings file to start from: it changes nothing by itself. */
export const settingsTemplate = `// Settings of Sizeproof. Without a key its default applies; \`sizeproof explain PATH\` lists them all.
{
  // Where outputs go, relative to this file.
  "outDir": "built",

  // Files that are no textures to build.
  "exclude": [],

  // Settings of every texture.
  "defaults": {},

  // Settings by glob; later treatments win, key by key. Take the slashes away from what you need.
  "treatments": [
    // { "match": "**/*_normal.png", "content": "normal", "wrap": "repeat" },
    // { "match": "**/*_height.png", "content": "height" },
    // { "match": "foliage/**", "alpha": { "use": "mask", "cutoff": 0.5 } },
    // { "match": "sprites/**", "kernel": "nearest", "levels": "none", "targets": ["1x", "2x"] }
  ]
}
`;
