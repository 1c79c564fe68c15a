export const accountsTexts = {};
