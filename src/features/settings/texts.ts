export const settingsTexts = {};
