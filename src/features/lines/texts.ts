export const linesTexts = {};
