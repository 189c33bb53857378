// Colours, symbols and dashes of every drawing. Each role differs from its neighbours in
// hue, lightness and form (symbol or dash), so that a grey print and a colour-blind reader
// lose nothing. style.css holds the same colours as custom properties; palette.test.mjs
// compares the two and computes the WCAG 2.2 contrasts.

export const SANS = '"Segoe UI", "Helvetica Neue", Roboto, "Noto Sans", "Liberation Sans", Arial, sans-serif';
export const SERIF = 'Charter, "Bitstream Charter", "Sitka Text", Cambria, "Noto Serif", "Liberation Serif", "Times New Roman", serif';

const light = {
  paper: '#f7f6f2', card: '#fffefb', ink: '#1d242c', dim: '#535c66', line: '#dcd9cf', edge: '#84806f',
  core: '#d9d5ca', potential: '#0a5f73', carrier: '#a85604', carrier2: '#7b3f94', carrier3: '#2c6e49', carrier4: '#ad2f55',
  carrier5: '#3457b0', carrier6: '#6d6200', dopant: '#646d97', good: '#256341', flag: '#8f3410',
};
const dark = {
  paper: '#12171c', card: '#191f26', ink: '#e8e6df', dim: '#a6aeb6', line: '#333c46', edge: '#75808b',
  core: '#3a434d', potential: '#6cc5d9', carrier: '#f0a24b', carrier2: '#cf9be6', carrier3: '#7fcf9f', carrier4: '#f58ba9',
  carrier5: '#9db5ff', carrier6: '#d9cd62', dopant: '#929cc6', good: '#7fcf9f', flag: '#f3a27c',
};

// white is the light theme on a white sheet: print and exported files.
const white = { ...light, paper: '#ffffff', card: '#ffffff' };

export const THEMES = { light, dark, white };

const SOLID = null;
// role → colour name in the theme, dash of its line, symbol of its points
const ROLES = {
  potential: ['potential', SOLID, 'circle'],
  carrier: ['carrier', SOLID, 'circle'],
  carrier2: ['carrier2', '7 3', 'square'],
  carrier3: ['carrier3', '2 3', 'triangle'],
  carrier4: ['carrier4', '9 3 2 3', 'diamond2'],
  carrier5: ['carrier5', '12 4', 'times'],
  carrier6: ['carrier6', '4 2 1 2', 'star'],
  dopant: ['dopant', '5 4', 'square'],
  interior: ['carrier', SOLID, 'circle'],
  boundary: ['potential', '8 3', 'square'],
  contact: ['carrier2', '2 3', 'triangle'],
  total: ['ink', SOLID, 'diamond2'],
  measured: ['carrier', SOLID, 'circle'],
  model: ['potential', SOLID, 'circle'],
  muted: ['dim', '3 3', 'times'],
};

// look gives the appearance of a role in a theme; an unknown role is drawn in ink.
export function look(role, theme) {
  const [name, dash, symbol] = ROLES[role] ?? ['ink', SOLID, 'circle'];
  return { colour: theme[name], dash, symbol };
}

export const roles = Object.keys(ROLES);
