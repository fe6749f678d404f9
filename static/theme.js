/* global document, localStorage */
// Runs before the first paint, so that a page never flashes in the other theme: the choice of this browser, else that of its system.
const theme = localStorage.getItem('skewline-theme');
if (theme === 'light' || theme === 'dark') document.documentElement.dataset.theme = theme;
