export const salesTexts = {};
